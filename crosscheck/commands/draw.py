"""``crosscheck draw``: the picture of a section alone."""

from __future__ import annotations

import argparse
from pathlib import Path

from crosscheck.commands.arguments import add_model_arguments, complain, told_progress
from crosscheck.commands.compare import compare_file
from crosscheck.exit_status import ExitStatus

FORMATS = (".svg", ".png", ".pdf")
EPILOG = """\
example:
  crosscheck draw cases/lipped_channel.toml --out lipped_channel.svg"""


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "draw",
        help="picture of a section: walls, outline, both shear centres, loads",
        description="Draw a section as both sides see it, to scale.",
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument("path", metavar="FILE", help="section file")
    command.add_argument("--out", required=True, metavar="PICTURE", help="file to write: .svg, .png or .pdf")
    command.add_argument(
        "--width", type=int, choices=(80, 160), default=160, help="width of the picture in mm (default 160)"
    )
    add_model_arguments(command)
    command.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Solve and draw; verdicts do not touch the status, a picture is no judgement."""
    out = Path(arguments.out)
    if out.suffix.lower() not in FORMATS:
        complain([f"--out: must end in {', '.join(FORMATS)}, got {arguments.out!r}"])
        return ExitStatus.BAD_INPUT
    with told_progress() as tell:
        result, status = compare_file(
            arguments.path, arguments.overrides, arguments.accuracy, tell, pictures=True
        )
        if result is None:
            return status
        from crosscheck.pictures import picture_bytes, section_picture
        from crosscheck.whole_files import write_whole

        content = picture_bytes(section_picture(result, arguments.width), out.suffix.lower()[1:])
        try:
            write_whole(out, content)
        except OSError as fault:
            complain([f"{out}: must be a file that can be written, got: {fault.strerror or fault}"])
            return ExitStatus.BAD_INPUT
    return ExitStatus.WITHIN
