"""``crosscheck template``: a ready section file of a common shape."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from crosscheck.commands.arguments import complain
from crosscheck.exit_status import ExitStatus

DESCRIPTION = """\
Print a ready section file of a common shape, with parameters and comments; without a shape, list them."""
EPILOG = """\
examples:
  crosscheck template
  crosscheck template lipped_channel > beam.toml
  crosscheck template n_cell_box --cells 7 --out box.toml
  crosscheck template --schema > section.schema.json"""


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "template",
        help="a ready section file of a common shape",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument("shape", nargs="?", metavar="SHAPE", help="name of the shape")
    command.add_argument("--cells", type=int, default=None, help="number of cells of n_cell_box (default 4)")
    command.add_argument("--out", metavar="FILE", help="write to a new file instead of standard output")
    command.add_argument(
        "--schema", action="store_true", help="print the JSON Schema of section files, for editors"
    )
    command.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Print or write; a file that exists is left as it is."""
    from crosscheck.faults import CrosscheckError
    from crosscheck.templates import template_names, template_text, template_title

    if arguments.schema:
        from crosscheck.section_file.json_schema import schema_text

        return _deliver(schema_text(), arguments.out)
    if arguments.shape is None:
        width = max(len(name) for name in template_names())
        lines = (f"{name:<{width}}  {template_title(name)}" for name in template_names())
        return _deliver("\n".join(lines) + "\n", arguments.out)
    try:
        text = template_text(arguments.shape, arguments.cells)
    except CrosscheckError as fault:
        complain([str(fault)])
        return ExitStatus.BAD_INPUT
    return _deliver(text, arguments.out)


def _deliver(text: str, out: str | None) -> ExitStatus:
    """To standard output, or to a file that does not exist yet."""
    if out is None:
        sys.stdout.write(text)
        return ExitStatus.WITHIN
    from crosscheck.whole_files import write_whole

    path = Path(out)
    if path.exists():
        complain([f"{out}: must be a new file, got one that exists; it is left as it is"])
        return ExitStatus.BAD_INPUT
    try:
        write_whole(path, text.encode())
    except OSError as fault:
        complain([f"{out}: must be a file that can be written, got: {fault.strerror or fault}"])
        return ExitStatus.BAD_INPUT
    return ExitStatus.WITHIN
