"""``crosscheck idealise``: walls found in a drawing, as a section file."""

from __future__ import annotations

import argparse
import math
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

from crosscheck.commands.arguments import complain, told_progress
from crosscheck.exit_status import ExitStatus
from crosscheck.units import UNIT_SYSTEMS

if TYPE_CHECKING:
    from crosscheck.tracing.idealising import Idealisation

EPILOG = """\
example:
  crosscheck idealise part.dxf
  crosscheck compare part.toml

exit status: 0 the walls stand for the drawing; 1 they do not, or it is no thin-walled section (the section
file is written all the same); 2 bad input."""


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "idealise",
        help="section file with the walls found in a drawing",
        description="Find the walls of a drawn outline and write them as a section file, drawing attached.",
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument(
        "path", metavar="PART", help="DXF drawing, STEP face, triangle mesh, or section file with [outline]"
    )
    command.add_argument("--out", metavar="DIR", help="folder to write to (default: that of PART)")
    command.add_argument("--replace", action="store_true", help="replace a section file that is there")
    command.add_argument(
        "--units", choices=tuple(UNIT_SYSTEMS), default="mm N", help='of the section file (default "mm N")'
    )
    command.add_argument("--drawing-unit", metavar="mm", help="unit of a drawing that states none")
    command.add_argument("--layers", metavar="NAME", nargs="+", help="layers of a DXF that hold the outline")
    command.add_argument(
        "--gap", metavar="0.01", type=_positive, help="ends of a DXF no farther apart are joined"
    )
    command.add_argument(
        "--even",
        action="store_true",
        help="write out the evened outline of an uneven boundary, for FE, instead of attaching the drawing",
    )
    command.add_argument(
        "--tolerance",
        type=_share,
        metavar="0.005",
        help="largest distance of a drawn face from its wall's, over the thickness (default 0.005, or "
        "what an uneven boundary asks for)",
    )
    command.add_argument(
        "--json", dest="json_path", metavar="PATH", help="quality as JSON; - for standard output"
    )
    command.set_defaults(run=run)


def _positive(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = math.nan
    if not (0.0 < value < math.inf):
        raise argparse.ArgumentTypeError(f"must be a number > 0, got {text!r}")
    return value


def _share(text: str) -> float:
    value = _positive(text)
    if value > 0.2:
        raise argparse.ArgumentTypeError(f"must be at most 0.2, got {text!r}")
    return value


def run(arguments: argparse.Namespace) -> int:
    """Find walls, write section file and pictures, tell how well they stand for the drawing."""
    path = Path(arguments.path)
    options: dict[str, Any] = {
        key: value
        for key in ("drawing_unit", "layers", "gap")
        if (value := getattr(arguments, key)) is not None
    }
    with told_progress() as tell:
        tell(f"{path}: reading")
        import fe_models
        from crosscheck.faults import SectionFaults
        from crosscheck.tracing.drawing_source import drawing_source
        from crosscheck.tracing.idealising import idealise

        try:
            source = drawing_source(path, arguments.units, options)
            tell(f"{path}: walls")
            found = idealise(source, arguments.tolerance, even=arguments.even)
        except SectionFaults as faults:
            complain(map(_in_options, faults.lines))
            return ExitStatus.BAD_INPUT
        except fe_models.OutlineError as fault:
            complain([f"{path}: {fault}"])
            return ExitStatus.BAD_INPUT
        tell(f"{path}: pictures")
        folder = path.parent if arguments.out is None else Path(arguments.out)
        written = _write(found, folder, arguments.replace)
    if written is None:
        return ExitStatus.BAD_INPUT
    status = ExitStatus.WITHIN if found.quality.good else ExitStatus.NOT_WITHIN
    from rich.console import Console

    from crosscheck.reports.tracing_report import tracing_json, tracing_screen

    stream = sys.stderr if arguments.json_path == "-" else sys.stdout
    console = Console(file=stream, highlight=False, markup=False, emoji=False)
    console.print(tracing_screen(found, written))
    if arguments.json_path == "-":
        sys.stdout.write(tracing_json(found))
    elif arguments.json_path is not None:
        from crosscheck.whole_files import write_whole

        try:
            write_whole(Path(arguments.json_path), tracing_json(found).encode())
        except OSError as fault:
            complain(
                [f"{arguments.json_path}: must be a file that can be written, got: {fault.strerror or fault}"]
            )
            return ExitStatus.BAD_INPUT
    return status


def _in_options(line: str) -> str:
    """A fault of a drawing in the words of this command's options."""
    for key in ("drawing_unit", "layers", "gap"):
        option = f"--{key.replace('_', '-')}"
        line = line.replace(f"outline.{key}:", f"{option}:").replace(f"{key} = ", f"{option} ")
    return line


def _write(found: Idealisation, folder: Path, replace: bool) -> list[str] | None:
    """Section file, drawing beside it, and pictures; their names, or None after a fault was told."""
    from crosscheck.pictures.canvas import picture_bytes
    from crosscheck.pictures.tracing import tracing_picture
    from crosscheck.whole_files import write_folder

    source = found.source
    stem = source.path.stem
    name = f"{stem}_walls.toml" if source.path.suffix.lower() == ".toml" else f"{stem}.toml"
    if not replace and (folder / name).exists():
        complain([f"{folder / name}: must not be there yet, or --replace be given"])
        return None
    files = {name: found.text.encode()}
    drawing = source.drawing
    if drawing is not None and folder.resolve() != source.path.parent.resolve():
        if Path(source.outline["file"]).name != source.outline["file"]:
            complain(
                [f"{source.path}: outline.file: must lie beside the section file to be copied with --out"]
            )
            return None
        files[drawing.name] = drawing.read_bytes()
    for width, suffix in ((160, ""), (80, "_80mm")):
        figure = tracing_picture(found, width)
        for kind in ("svg", "png"):
            files[f"{stem}_walls{suffix}.{kind}"] = picture_bytes(figure, kind)
    try:
        written = write_folder(folder, files)
    except OSError as fault:
        complain([f"{folder}: must be a folder that can be written, got: {fault.strerror or fault}"])
        return None
    pictures = [f"{stem}_walls.svg, .png"]
    return [str(w) for w in written if w.suffix == ".toml"] + pictures
