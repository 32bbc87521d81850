"""``crosscheck compare``: both sides of one or more section files."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from crosscheck.commands.arguments import add_model_arguments, complain, told_progress, worker_count
from crosscheck.exit_status import ExitStatus

if TYPE_CHECKING:
    import fe_models
    from crosscheck.commands.several import Reported
    from crosscheck.comparison.comparing import Progress
    from crosscheck.comparison.result import Result
    from crosscheck.faults import Fault
    from crosscheck.section_file.model import SectionFile

DESCRIPTION = """\
Solve section files by classical theory and by finite elements and report every difference, worst first.
A folder stands for the section files (*.toml) in it."""
EPILOG = """\
examples:
  crosscheck compare cases/sections/lipped_channel_floor_beam.toml
  crosscheck compare cases/sections/lipped_channel_floor_beam.toml --out report --set "t = 2.5"
  crosscheck compare cases/sections/two_cell_tail_boom.toml --table stiffness --working --out report
  crosscheck compare cases/sections --json results.json"""
# Names of crosscheck.reports.tables.TABLES, which help must not load.
TABLE_NAMES = (
    "levels",
    "stated",
    "walls",
    "margins",
    "places",
    "stiffness",
    "envelope",
    "probes",
    "stresses",
)

# Endings that fe_models.write_fields takes.
FIELD_FORMATS = ("vtu", "msh")


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "compare",
        help="hand methods beside finite elements, quantity by quantity",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument("paths", nargs="+", metavar="FILE", help="section file, or a folder of them")
    command.add_argument(
        "--out", metavar="DIR", help="draw the pictures (SVG and PNG) and write result.json into this folder"
    )
    command.add_argument(
        "--json", dest="json_path", metavar="PATH", help="write the result as JSON; - for standard output"
    )
    command.add_argument(
        "--working",
        action="store_true",
        help="the hand sheet of every load: working_LOAD.md in DIR, and in the JSON; on screen without both",
    )
    command.add_argument(
        "--table",
        dest="tables",
        action="append",
        default=[],
        choices=TABLE_NAMES,
        metavar="NAME",
        help="show a table below the screen, and write it into DIR to paste from, as CSV, Markdown and HTML: "
        f"{', '.join(TABLE_NAMES)}",
    )
    command.add_argument(
        "--fields",
        action="append",
        default=[],
        choices=FIELD_FORMATS,
        metavar="FORMAT",
        help="write FE's mesh and fields, fields.FORMAT in DIR: " + ", ".join(FIELD_FORMATS),
    )
    command.add_argument(
        "--envelope",
        metavar="PATH",
        help="an envelope of threshold: say whether the section is inside, at the edge or outside",
    )
    command.add_argument(
        "--workers",
        type=worker_count,
        metavar="N",
        help="several sections are compared in N worker processes, one numerical thread each (default: one "
        "for each core)",
    )
    add_model_arguments(command)
    command.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Compare every section; one that cannot be read or solved does not stop the others."""
    if arguments.fields and not fields_can_be_written(arguments.out):
        return ExitStatus.BAD_INPUT
    envelope_faults = unreadable_envelope(arguments.envelope)
    paths, missing = section_paths(arguments.paths)
    complain((*envelope_faults, *missing))
    if envelope_faults:
        return ExitStatus.BAD_INPUT
    status = ExitStatus.BAD_INPUT if missing else ExitStatus.WITHIN
    folders = output_folders(paths, arguments.out)
    from crosscheck.commands.several import reported_by_workers, show_summary

    if len(paths) > 1:
        from crosscheck.batch.task import BatchError

        try:
            reports = list(reported_by_workers(arguments, paths, folders))
        except BatchError as fault:
            complain([str(fault)])
            return ExitStatus.FAILED
    else:
        reports = [report(path, folder, arguments) for path, folder in zip(paths, folders, strict=True)]
    status = max((status, *(ExitStatus(each.status) for each in reports)))
    if len(reports) > 1:
        show_summary(reports, error_stream=arguments.json_path == "-")
    documents = [each.document for each in reports if each.document is not None]
    if documents:
        status = max(status, write_json(documents, arguments.json_path))
    return status


def report(path: str, folder: Path | None, arguments: argparse.Namespace) -> Reported:
    """One section from its file to its screen, its folder and what is left for the end."""
    from crosscheck.commands.several import Reported

    with told_progress() as tell:
        result, status = compare_file(
            path,
            arguments.overrides,
            arguments.accuracy,
            tell,
            pictures=folder is not None,
            working=arguments.working,
            fields=tuple(dict.fromkeys(arguments.fields)),
        )
        if result is None:
            return Reported(path, status)
        written = ExitStatus.WITHIN
        if folder is not None:
            written = write_report(result, folder, arguments.tables, tell)
    # Standard output belongs to the JSON when that is asked for.
    stream = sys.stderr if arguments.json_path == "-" else sys.stdout
    where = str(folder) if folder is not None and written < ExitStatus.BAD_INPUT else None
    show(result, where, stream, arguments.tables)
    if arguments.envelope is not None:
        show_standing(path, arguments, result, stream)
    if result.working is not None and folder is None and arguments.json_path is None:
        stream.write("\n".join(("", *result.working.values())))
    return left_of(path, result, max(status, written), json=arguments.json_path is not None)


def left_of(path: str, result: Result, status: ExitStatus, *, json: bool) -> Reported:
    """What the summary and the JSON need of a result."""
    from crosscheck.commands.several import Reported
    from crosscheck.reports.result_json import document
    from crosscheck.reports.wording import (
        full_difference_text,
        name_of,
        one_row_a_family,
        verdict_sentence,
        worst_first,
    )

    rows = [row for row in one_row_a_family(worst_first(result.quantities)) if row.verdict is not None]
    worst = f"{name_of(rows[0])}: {full_difference_text(rows[0], result.length_unit)}" if rows else ""
    held = sum(row.verdict == "within" for row in rows), len(rows)
    content = document(result) if json else None
    return Reported(path, status, content, verdict_sentence(result), held, worst)


def unreadable_envelope(path: str | None) -> tuple[str, ...]:
    """Lines of what is wrong with the envelope given, if anything is."""
    if path is None:
        return ()
    from crosscheck.family.validity import read_envelope
    from crosscheck.faults import SectionFaults

    try:
        read_envelope(path)
    except SectionFaults as faults:
        return faults.lines
    return ()


def show_standing(path: str, arguments: argparse.Namespace, result: Result, stream: object) -> None:
    """Where the section stands to the envelope."""
    from rich.console import Console

    from crosscheck.family.validity import read_envelope, standings
    from crosscheck.reports.standing_lines import standing_lines
    from crosscheck.section_file.reader import read_source, section_from

    source = read_source(path)
    section = section_from(source, tuple(arguments.overrides))
    found = standings(read_envelope(arguments.envelope), source, section, result)
    console = Console(stderr=stream is sys.stderr, highlight=False, markup=False, emoji=False)
    for line in standing_lines(arguments.envelope, found):
        console.print(line)


def fields_can_be_written(out: str | None) -> bool:
    """Whether there is a folder for files of fields and the library that writes them; else it is told."""
    if out is None:
        complain(["--fields: must be given with --out DIR, into which the files go, got no --out"])
        return False
    import fe_models

    try:
        fe_models.require_mesh_library()
    except fe_models.LibraryError as fault:
        complain([f"--fields: {fault}"])
        return False
    return True


def section_paths(given: Sequence[str]) -> tuple[list[str], list[str]]:
    """Section files meant by the arguments, and a line for each argument that means none."""
    paths: list[str] = []
    faults: list[str] = []
    for name in given:
        if not os.path.isdir(name):
            paths.append(name)
            continue
        inside = sorted(str(path) for path in Path(name).glob("*.toml"))
        if not inside:
            faults.append(
                f"{name}: must be a section file or a folder with *.toml files, got a folder with none"
            )
        paths += inside
    return paths, faults


def output_folders(paths: Sequence[str], out: str | None) -> list[Path | None]:
    """Folder of each section's output: ``out`` itself for one, a folder named after the file for several."""
    if out is None:
        return [None] * len(paths)
    if len(paths) == 1:
        return [Path(out)]
    folders: list[Path | None] = []
    for path in paths:
        stem, folder, number = Path(path).stem, Path(out) / Path(path).stem, 1
        while folder in folders:
            number += 1
            folder = Path(out) / f"{stem}_{number}"
        folders.append(folder)
    return folders


def compare_file(
    path: str,
    overrides: Sequence[str],
    accuracy: float,
    tell: Progress,
    *,
    pictures: bool,
    working: bool = False,
    fields: Sequence[str] = (),
) -> tuple[Result | None, ExitStatus]:
    """Read and compare one file; its faults go to the error stream."""
    tell(f"{path}: reading")
    from crosscheck.faults import SectionFaults
    from crosscheck.section_file.reader import read_section

    try:
        section = read_section(path, tuple(overrides))
    except SectionFaults as faults:
        complain(faults.lines)
        return None, ExitStatus.BAD_INPUT

    import beam_theory
    import fe_models
    from crosscheck.comparison.comparing import compare

    try:
        result = compare(
            section,
            accuracy,
            lambda text: tell(f"{path}: {text}"),
            pictures=pictures,
            working=working,
            fields=fields,
        )
    except fe_models.OutlineError as fault:
        complain([outline_fault(path, section, fault).text])
        return None, ExitStatus.BAD_INPUT
    except beam_theory.SectionError as fault:
        complain(f"{path}: {line}" for line in fault.faults)
        return None, ExitStatus.BAD_INPUT
    except (fe_models.FeError, beam_theory.TheoryError) as fault:
        side = "finite elements" if isinstance(fault, fe_models.FeError) else "classical theory"
        complain([f"{path}: {side}: {fault}"])
        return None, ExitStatus.FAILED
    return result, result_status(result)


def outline_fault(path: str, section: SectionFile, fault: fe_models.OutlineError) -> Fault:
    """A solid that cannot be built, as a fault of the file: at its first wall, both named."""
    from crosscheck.faults import Fault

    known = {wall.name: wall for wall in section.walls}
    named = [name for name in fault.walls if name in known]
    key = {"radius": "corners", "limit": "walls", "agreement": "outline"}.get(fault.kind) or (
        known[named[0]].key if named else "walls" if section.walls else "outline"
    )
    shown = ", ".join(f'"{name}"' for name in named[:4]) + (" and more" if len(named) > 4 else "")
    found = fault.found if fault.kind == "limit" or not shown else f"{fault.found} (walls {shown})"
    remedy = ""
    if fault.kind == "agreement":
        remedy = "mend the one that is wrong, or mark the walls and booms that idealise with seen_by"
    return Fault(path, key, found, fault.allowed, remedy)


def result_status(result: Result) -> ExitStatus:
    """0 when every verdict is within, stated values' too, and every self-check passed, else 1.

    Nulls do not count.
    """
    verdicts = [row.verdict for row in result.quantities] + [stated.verdict for stated in result.stated]
    held = all(verdict in ("within", None) for verdict in verdicts)
    sound = all(check.passed for check in result.checks)
    return ExitStatus.WITHIN if held and sound else ExitStatus.NOT_WITHIN


def write_report(result: Result, folder: Path, tables: Sequence[str], tell: Progress) -> ExitStatus:
    """All that goes into the folder of one section, made before the first file is written."""
    from crosscheck.file_names import free_name
    from crosscheck.pictures import every_picture
    from crosscheck.reports.result_json import json_text
    from crosscheck.reports.result_table import table_bytes
    from crosscheck.reports.tables import TABLES
    from crosscheck.whole_files import write_folder

    tell(f"{result.title}: pictures")
    files = every_picture(result)
    sheets: dict[str, bytes] = {}
    for load, text in (result.working or {}).items():
        sheets[free_name(f"working_{load}", sheets)] = text.encode()
    files |= {f"{name}.md": content for name, content in sheets.items()}
    for name in tables:
        files |= table_bytes(TABLES[name](result))
    files |= result.field_files
    files["result.json"] = json_text([result]).encode()
    try:
        write_folder(folder, files)
    except OSError as fault:
        complain([f"{folder}: must be a folder that can be written, got: {fault.strerror or fault}"])
        return ExitStatus.BAD_INPUT
    return ExitStatus.WITHIN


def write_json(documents: Sequence[dict[str, Any]], path: str) -> ExitStatus:
    """The JSON to a file, whole or not at all, or to standard output."""
    from crosscheck.reports.result_json import documents_text
    from crosscheck.whole_files import write_whole

    text = documents_text(documents)
    if path == "-":
        sys.stdout.write(text)
        return ExitStatus.WITHIN
    try:
        write_whole(Path(path), text.encode())
    except OSError as fault:
        complain([f"{path}: must be a file that can be written, got: {fault.strerror or fault}"])
        return ExitStatus.BAD_INPUT
    return ExitStatus.WITHIN


def show(result: Result, pictures: str | None, stream: object, tables: Sequence[str] = ()) -> None:
    """The first screen and the tables asked for, on standard output or on the error stream."""
    from rich.console import Console

    from crosscheck.reports.screen import console_for, first_screen
    from crosscheck.reports.tables import TABLES

    console = Console(stderr=stream is sys.stderr, highlight=False, markup=False, emoji=False)
    width, unicode = console_for(console)
    shown = [TABLES[name](result) for name in dict.fromkeys(tables)]
    console.print(first_screen(result, width, unicode=unicode, pictures=pictures, tables=shown))
