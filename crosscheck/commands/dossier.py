"""``crosscheck dossier``: the evidence of one or more sections as a package, and the check of one."""

from __future__ import annotations

import argparse
import importlib.util
import sys
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from crosscheck.commands.arguments import add_model_arguments, complain, told_progress
from crosscheck.commands.compare import outline_fault, result_status, section_paths
from crosscheck.exit_status import ExitStatus

if TYPE_CHECKING:
    from crosscheck.comparison.comparing import Progress
    from crosscheck.dossier.evidence import Envelope, SectionEvidence
    from crosscheck.dossier.suite import SuiteEvidence

LIBRARIES = ("typst", "jinja2")
DESCRIPTION = """\
Write what is attached to a stress report: a typeset PDF, one self-contained HTML page, ten plates a section,
inputs, results and a manifest with the hash of every file. Or check such a package."""
EPILOG = """\
examples:
  crosscheck dossier cases/sections/three_cell_wing_box.toml --out dossier
  crosscheck dossier cases/sections --evidence evidence.json --out dossier
  crosscheck dossier --check dossier

--check confirms that a package is whole and unaltered, solves its inputs again and compares every number."""


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "dossier",
        help="evidence for a certification package: PDF, HTML, plates, manifest",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument("paths", nargs="*", metavar="FILE", help="section file, or a folder of them")
    command.add_argument(
        "--out", metavar="DIR", help="folder of the package; an older package there is replaced"
    )
    command.add_argument("--check", metavar="DIR", help="check a package instead of writing one")
    command.add_argument(
        "--evidence", metavar="PATH", help="stored evidence of 'crosscheck verify --json PATH'"
    )
    command.add_argument(
        "--envelope", metavar="PATH", help="envelope of threshold that the sections are held against"
    )
    command.add_argument(
        "--hand-sheet",
        dest="hand_sheets",
        action="append",
        default=[],
        metavar="LOAD",
        help="load whose hand sheet is in the document; may be given several times (default: the load that "
        "governs most walls)",
    )
    add_model_arguments(command)
    command.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Write a package, or check one."""
    faults = _argument_faults(arguments)
    if faults:
        complain(faults)
        return ExitStatus.BAD_INPUT
    if arguments.check is not None:
        return _check(Path(arguments.check))
    return _write(arguments)


def _argument_faults(arguments: argparse.Namespace) -> list[str]:
    """What the arguments lack, a line each."""
    if arguments.check is not None:
        clash = arguments.paths or arguments.out
        return ["--check: must stand alone, got section files or --out besides"] if clash else []
    faults = []
    if not arguments.paths:
        faults.append("dossier: must have section files, got none; or --check DIR")
    if arguments.out is None:
        faults.append("dossier: must have --out DIR, got nothing")
    absent = [name for name in LIBRARIES if importlib.util.find_spec(name) is None]
    if absent:
        faults.append(
            f"dossier: must have {' and '.join(absent)} installed, got nothing; "
            'pip install "crosscheck[dossier]"'
        )
    return faults


def _write(arguments: argparse.Namespace) -> int:
    """Solve everything, then write the whole package at once."""
    from crosscheck.batch.task import BatchError
    from crosscheck.dossier.package import MANIFEST, package_files
    from crosscheck.faults import SectionFaults
    from crosscheck.whole_files import write_tree

    paths, missing = section_paths(arguments.paths)
    complain(missing)
    out = Path(arguments.out)
    if out.exists() and not (out.is_dir() and ((out / MANIFEST).is_file() or not any(out.iterdir()))):
        complain([f"{out}: must be a new folder, an empty one or an older package, got something else"])
        return ExitStatus.BAD_INPUT
    try:
        suite = _suite(arguments.evidence)
        envelope = _envelope(arguments.envelope)
    except SectionFaults as faults:
        complain(faults.lines)
        return ExitStatus.BAD_INPUT
    if missing:
        return ExitStatus.BAD_INPUT
    with told_progress() as tell:
        evidence, status = _gathered(paths, arguments, envelope, tell)
        if status >= ExitStatus.BAD_INPUT:
            return status
        unknown = _unknown_loads(evidence, arguments.hand_sheets)
        if unknown:
            complain(unknown)
            return ExitStatus.BAD_INPUT
        try:
            files = package_files(evidence, suite, arguments.hand_sheets, tell, envelope)
        except BatchError as fault:
            complain([str(fault)])
            return ExitStatus.FAILED
        try:
            write_tree(out, files)
        except OSError as fault:
            complain([f"{out}: must be a folder that can be written, got: {fault.strerror or fault}"])
            return ExitStatus.BAD_INPUT
    _tell_outcome(evidence, out, len(files), suite is not None)
    if suite is not None and suite.passed < len(suite.checks):
        status = max(status, ExitStatus.NOT_WITHIN)
    return status


def _suite(path: str | None) -> SuiteEvidence | None:
    if path is None:
        return None
    from crosscheck.dossier.suite import read_suite

    return read_suite(path)


def _envelope(path: str | None) -> Envelope | None:
    if path is None:
        return None
    from crosscheck.dossier.evidence import read_envelope_file

    return read_envelope_file(path)


def _gathered(
    paths: list[str], arguments: argparse.Namespace, envelope: Envelope | None, tell: Progress
) -> tuple[list[SectionEvidence], ExitStatus]:
    """Evidence of every section; faults of all of them are told, and then nothing is written."""
    import beam_theory
    import fe_models
    from crosscheck.batch.task import BatchError
    from crosscheck.dossier.evidence import gather
    from crosscheck.faults import SectionFaults
    from crosscheck.section_file.reader import read_section

    found: list[SectionEvidence] = []
    status = ExitStatus.WITHIN
    for path in paths:
        try:
            section = read_section(path, tuple(arguments.overrides))
        except SectionFaults as faults:
            complain(faults.lines)
            status = max(status, ExitStatus.BAD_INPUT)
            continue
        try:
            found.append(gather(section, arguments.accuracy, partial(_tell_of, tell, path), envelope))
        except fe_models.OutlineError as fault:
            complain([outline_fault(path, section, fault).text])
            status = max(status, ExitStatus.BAD_INPUT)
            continue
        except beam_theory.SectionError as fault:
            complain(f"{path}: {line}" for line in fault.faults)
            status = max(status, ExitStatus.BAD_INPUT)
            continue
        except (fe_models.FeError, beam_theory.TheoryError, BatchError) as fault:
            complain([f"{path}: {fault}"])
            status = max(status, ExitStatus.FAILED)
            continue
        status = max(status, result_status(found[-1].result))
    return found, status


def _tell_of(tell: Progress, path: str, text: str) -> None:
    """Progress with the file in front."""
    tell(f"{path}: {text}")


def _unknown_loads(evidence: list[SectionEvidence], asked: list[str]) -> list[str]:
    """A line for each load asked for that no section has."""
    known = dict.fromkeys(load for each in evidence for load in each.result.working or {})
    return [
        f"--hand-sheet: must be one of {', '.join(known)}, got {load!r}"
        for load in asked
        if load not in known
    ]


def _tell_outcome(evidence: list[SectionEvidence], out: Path, files: int, attached: bool) -> None:
    """What came out, a line a section, and where it is."""
    from crosscheck.faults import one_line
    from crosscheck.reports.wording import SAFETY, verdict_sentence

    lines = [one_line(f"{each.result.title}: {verdict_sentence(each.result)}", 500) for each in evidence]
    lines.append(f"{out}: dossier.pdf, dossier.html and {files - 2} more files; check with --check {out}")
    if not attached:
        lines.append("Evidence of the verification suite is not attached: add --evidence PATH.")
    sys.stdout.write("\n".join([*lines, SAFETY, ""]))


def _check(folder: Path) -> int:
    """Check a package; a line for each finding."""
    import beam_theory
    import fe_models
    from crosscheck.batch.task import BatchError
    from crosscheck.dossier.checking import check_package
    from crosscheck.faults import SectionFaults

    if not folder.is_dir():
        complain([f"{folder}: must be the folder of a dossier, got no folder"])
        return ExitStatus.BAD_INPUT
    with told_progress() as tell:
        try:
            outcome = check_package(folder, tell)
        except SectionFaults as faults:
            complain(faults.lines)
            return ExitStatus.NOT_WITHIN
        except (fe_models.FeError, beam_theory.TheoryError, BatchError) as fault:
            complain([f"{folder}: {fault}"])
            return ExitStatus.FAILED
    sys.stdout.write("".join(f"{line}\n" for line in outcome.found))
    complain(outcome.faults)
    if outcome.passed:
        sys.stdout.write(f"{folder}: whole, unaltered, and its numbers come out again\n")
    return ExitStatus.WITHIN if outcome.passed else ExitStatus.NOT_WITHIN
