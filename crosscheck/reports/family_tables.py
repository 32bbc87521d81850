"""A family as CSV and JSON, written member by member: memory does not grow with their number."""

from __future__ import annotations

import json
from collections.abc import Iterable, Iterator
from typing import Any

from crosscheck.batch.journal import Journal
from crosscheck.comparison.result import LEVELS
from crosscheck.family.members import Member, Row
from crosscheck.family.sweep import Sweep, members_of
from crosscheck.reports.result_table import Cell, csv_line

SWEEP_SCHEMA = "crosscheck.sweep/1"


def csv_pieces(sweep: Sweep, journal: Journal) -> Iterator[bytes]:
    """One row a quantity of a member; a member without a section has one row with its reason."""
    names = sweep.family.names
    ratio = (sweep.family.ratio,) if sweep.family.ratio is not None else ()
    yield csv_line(
        (
            "member", *names, *ratio, "status", "quantity", "load", "unit", *LEVELS, "FE", "FE low",
            "FE high", "basis", *(f"difference {level}" for level in LEVELS), "normaliser", "uncertainty",
            "criterion", "verdict", "remark",
        )
    )  # fmt: skip
    for number, (values, member) in enumerate(members_of(sweep.family, journal)):
        start: tuple[Cell, ...] = (number, *values, *((member.ratio,) if ratio else ()), member.status)
        if not member.rows:
            yield csv_line((*start, *(None,) * 17, member.reason))
        yield b"".join(csv_line((*start, *_cells(row))) for row in member.rows)


def _cells(row: Row) -> Iterable[Cell]:
    return (
        row.name, row.load, row.unit, *row.theory, row.fe, row.fe_low, row.fe_high, row.basis,
        *row.difference, row.normaliser, row.uncertainty, row.criterion, row.verdict, row.reason,
    )  # fmt: skip


def json_pieces(sweep: Sweep, journal: Journal) -> Iterator[bytes]:
    """The family as JSON, schema ``crosscheck.sweep/1``, a line for each member."""
    head = {
        "schema": SWEEP_SCHEMA,
        "title": sweep.title,
        "units": {"length": sweep.length_unit, "force": sweep.force_unit},
        "judged": sweep.judged,
        "parameters": [
            {"name": each.name, "scale": each.scale, "values": list(each.values), "today": today}
            for each, today in zip(sweep.family.ranges, sweep.today, strict=True)
        ],
        "inputs": sweep.family.inputs,
    }
    yield b"{\n"
    for name, content in head.items():
        yield f" {_text(name)}: {_text(content)},\n".encode()
    yield b' "members": ['
    between = "\n"
    for values, member in members_of(sweep.family, journal):
        yield f"{between}  {_text(_member(sweep, values, member))}".encode()
        between = ",\n"
    yield b"\n ]\n}\n"


def _member(sweep: Sweep, values: tuple[float, ...], member: Member) -> dict[str, Any]:
    told: dict[str, Any] = {
        "values": dict(zip(sweep.family.names, values, strict=True)),
        "ratio": member.ratio,
        "status": member.status,
        "reason": member.reason,
        "failed_checks": list(member.failed_checks),
        "accuracy_met": member.accuracy_met,
    }
    told["quantities"] = [_quantity(row) for row in member.rows]
    return told


def _quantity(row: Row) -> dict[str, Any]:
    return {
        "name": row.name,
        "load": row.load,
        "unit": row.unit,
        "theory": dict(zip(LEVELS, row.theory, strict=True)),
        "fe": {"value": row.fe, "low": row.fe_low, "high": row.fe_high, "basis": row.basis},
        "difference": dict(zip(LEVELS, row.difference, strict=True)),
        "normaliser": row.normaliser,
        "uncertainty": row.uncertainty,
        "criterion": row.criterion,
        "verdict": row.verdict,
        "reason": row.reason,
    }


def _text(content: Any) -> str:
    return json.dumps(content, ensure_ascii=False, allow_nan=False)
