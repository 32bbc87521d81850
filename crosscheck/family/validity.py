"""The envelope of a shape: where each criterion holds, as a document that other sections are held against."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Literal

from crosscheck.comparison.result import LEVELS
from crosscheck.family.crossings import Piece
from crosscheck.family.envelope_form import form_fault
from crosscheck.family.threshold import Key, Line, Study, Threshold
from crosscheck.faults import Fault, FaultList, SectionFaults
from crosscheck.section_file.source import SectionSource, plain_content

if TYPE_CHECKING:
    from crosscheck.comparison.result import Result
    from crosscheck.section_file.model import SectionFile

SCHEMA = "crosscheck.envelope/1"
LIMIT = 50_000_000  # bytes
# A value nearer than this to a threshold is at the edge [-], of the threshold.
EDGE = 0.01
# Keys of a section file that change no number of the comparison.
NO_INFLUENCE = ("title", "judged", "criteria", "stated", "document", "tolerances", "allowables", "schema")
Word = Literal["inside", "at the edge", "outside", "not covered"]


@dataclass(frozen=True)
class Stretch:
    """Where all quantities of a level hold together, and which of them end it (None: the range does)."""

    start: float
    end: float
    start_key: Key | None
    end_key: Key | None


def common_stretches(thresholds: Sequence[Threshold]) -> list[Stretch]:
    """Where every one of them holds; those that compare nothing are left out."""
    known = [each for each in thresholds if each.known is not None]
    if not known:
        return []
    common = [
        Stretch(
            piece.start,
            piece.end,
            known[0].key if piece.start_crossing else None,
            known[0].key if piece.end_crossing else None,
        )
        for piece in known[0].pieces
    ]
    for each in known[1:]:
        cut: list[Stretch] = []
        for one in common:
            for piece in each.pieces:
                start, end = max(one.start, piece.start), min(one.end, piece.end)
                if start >= end:
                    continue
                start_key, end_key = one.start_key, one.end_key
                if piece.start > one.start:
                    start_key = each.key if piece.start_crossing else None
                if piece.end < one.end:
                    end_key = each.key if piece.end_crossing else None
                cut.append(Stretch(start, end, start_key, end_key))
        common = cut
    return common


def shape_digest(source: SectionSource, varied: Sequence[str]) -> str:
    """SHA-256 of what makes the shape: the file without title and criteria, without varied values."""
    document = {key: value for key, value in source.document.items() if key not in NO_INFLUENCE}
    given = document.get("parameters", {})
    document["parameters"] = [[name, None if name in varied else value] for name, value in given.items()]
    document["tables"] = {key: table.sha256 for key, table in source.tables.items()}
    return hashlib.sha256(json.dumps(document, sort_keys=True, default=str).encode()).hexdigest()


def envelope_document(study: Study) -> dict[str, Any]:
    """The envelope of a study as plain JSON."""
    family = study.family
    return {
        "schema": SCHEMA,
        "title": study.title,
        "units": {"length": study.length_unit, "force": study.force_unit},
        "judged": study.judged,
        "shape": {
            "file": family.source.path,
            "shape_sha256": shape_digest(family.source, family.names),
            **family.inputs,
        },
        "parameters": [
            {
                "name": each.name,
                "from": each.low,
                "to": each.high,
                "values": sorted(each.values),
                "today": today,
            }
            for each, today in zip(family.ranges, study.today, strict=True)
        ],
        "largest_scan_step": study.step,
        "edge": EDGE,
        "lines": [_line(line) for line in study.lines],
    }


def _line(line: Line) -> dict[str, Any]:
    return {
        "second": line.second,
        "gaps": [{"value": at, "reason": reason} for at, reason in line.gaps],
        "quantities": [_threshold(each) for each in line.thresholds],
    }


def _threshold(each: Threshold) -> dict[str, Any]:
    return {
        "name": each.name,
        "load": each.load,
        "level": each.level,
        "criterion": each.criterion,
        "basis": each.basis,
        "known": each.known,
        "holds": [_piece(piece) for piece in each.pieces],
        "fails": [_piece(piece) for piece in each.fails],
        "thresholds": [
            {
                "value": crossing.value,
                "low": crossing.low,
                "high": crossing.high,
                "above": "outside" if crossing.outside_above else "within",
            }
            for crossing in each.crossings
        ],
        "today": None if each.today is None else {"difference": each.today[0], "uncertainty": each.today[1]},
        "reason": each.reason,
    }


def _piece(piece: Piece) -> dict[str, Any]:
    """What lies in no piece is not known: nothing was solved, or verdicts were inconclusive."""
    return {
        "from": piece.start,
        "to": piece.end,
        "from_is": "threshold" if piece.start_crossing else "end of what is known",
        "to_is": "threshold" if piece.end_crossing else "end of what is known",
    }


@dataclass(frozen=True)
class Standing:
    """Where a section stands to an envelope, for one quantity at its judged level."""

    name: str
    load: str | None
    word: Word
    reason: str


def read_envelope(path: str) -> dict[str, Any]:
    """An envelope from its file.

    Raises
    ------
    SectionFaults
        Where it is none.
    """
    content = plain_content(path, FaultList(path), f"an envelope ({SCHEMA})", LIMIT)
    try:
        document = json.loads(content)
    except (ValueError, RecursionError) as fault:
        raise _no_envelope(path, f"no JSON ({fault})") from None
    if not isinstance(document, dict) or document.get("schema") != SCHEMA:
        raise _no_envelope(path, "another document")
    if (found := form_fault(document)) is not None:
        raise _no_envelope(path, found)
    return document


def _no_envelope(path: str, found: str) -> SectionFaults:
    allowed = f"an envelope as the command threshold writes it ({SCHEMA})"
    return SectionFaults([Fault(path, "", found, allowed)])


def standings(
    envelope: Mapping[str, Any], source: SectionSource, section: SectionFile, result: Result
) -> list[Standing]:
    """Where a section stands for each of its quantities; nothing is extrapolated.

    Between two values of a second parameter a quantity is inside only where it is at both.
    """
    names = [each["name"] for each in envelope["parameters"]]
    reason = _not_covered(envelope, source, section, names)
    places: list[tuple[Key, float]] = [((row.name, row.load), row.criterion) for row in result.quantities]
    if reason is not None:
        return [Standing(*key, "not covered", reason) for key, _ in places]
    values = [section.parameters[name] for name in names]
    lines = list(_lines_round(envelope, values))
    return [_standing(envelope, lines, key, limit, values[0], section.judged) for key, limit in places]


def _not_covered(
    envelope: Mapping[str, Any], source: SectionSource, section: SectionFile, names: Sequence[str]
) -> str | None:
    """Why the envelope says nothing of a section, or None."""
    if shape_digest(source, names) != envelope["shape"]["shape_sha256"]:
        return "the envelope is of another shape"
    own = {name: text for name, text in section.overrides.items() if name not in names}
    theirs = dict(_override(text) for text in envelope["shape"]["set"])
    if own != theirs:
        return "the envelope was made with other parameters set"
    for each in envelope["parameters"]:
        value = section.parameters[each["name"]]
        if not each["from"] <= value <= each["to"]:
            return (
                f"{each['name']} = {value:g} is beyond the range of the envelope, {each['from']:g} to "
                f"{each['to']:g}"
            )
    return None


def _override(text: str) -> tuple[str, str]:
    name, _, value = text.partition("=")
    return name.strip(), value.strip().strip("\"'")


def _lines_round(envelope: Mapping[str, Any], values: Sequence[float]) -> Iterator[Mapping[str, Any]]:
    """The line at the second value, or those on both sides of it."""
    lines = envelope["lines"]
    if len(values) == 1:
        yield lines[0]
        return
    exact = [line for line in lines if line["second"] == values[1]]
    if exact:
        yield exact[0]
        return
    seconds = [line["second"] for line in lines if line["second"] is not None]
    below = [second for second in seconds if second < values[1]]
    above = [second for second in seconds if second > values[1]]
    if below and above:
        yield next(line for line in lines if line["second"] == max(below))
        yield next(line for line in lines if line["second"] == min(above))


def _standing(
    envelope: Mapping[str, Any],
    lines: Sequence[Mapping[str, Any]],
    key: Key,
    criterion: float,
    value: float,
    judged: str,
) -> Standing:
    words: list[Word] = []
    if not lines:
        return Standing(*key, "not covered", "no section was solved on both sides of it")
    for line in lines:
        row = next(
            (
                each
                for each in line["quantities"]
                if (each["name"], each["load"]) == key and each["level"] == judged
            ),
            None,
        )
        if row is None or row["known"] is None:
            return Standing(*key, "not covered", "the envelope does not have it at this level")
        if row["criterion"] != criterion:
            told = f"the envelope is for a criterion of {row['criterion']:g}, here it is {criterion:g}"
            return Standing(*key, "not covered", told)
        word = _word(row, value, envelope["edge"])
        if word == "not covered":
            return Standing(*key, word, "no section was solved there, or its verdict was inconclusive")
        words.append(word)
    if len(set(words)) == 1:
        return Standing(*key, words[0], "")
    return Standing(*key, "at the edge", "inside on one neighbouring line of the envelope only")


def _word(row: Mapping[str, Any], value: float, edge: float) -> Word:
    """Where a value stands on one line."""
    for each in row["thresholds"]:
        margin = edge * abs(each["value"])
        if each["low"] - margin <= value <= each["high"] + margin:
            return "at the edge"
    if any(piece["from"] <= value <= piece["to"] for piece in row["holds"]):
        return "inside"
    return (
        "outside" if any(piece["from"] <= value <= piece["to"] for piece in row["fails"]) else "not covered"
    )


def levels_of(study: Study) -> list[str]:
    """Levels that a study has, in their order."""
    found = {each.level for line in study.lines for each in line.thresholds}
    return [level for level in LEVELS if level in found]


def level_shown_first(study: Study) -> str:
    """The level judged, or the first of those asked for where it is none of them."""
    levels = levels_of(study)
    return study.judged if study.judged in levels or not levels else levels[0]
