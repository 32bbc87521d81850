"""The result as JSON: schema ``crosscheck.result/1``, full precision, stable order."""

from __future__ import annotations

import json
import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import asdict
from typing import Any

from crosscheck.comparison.result import SCHEMA, FeValue, PropertyRow, QuantityResult, Result, WallFlow

SEVERAL_SCHEMA = "crosscheck.results/1"


def document(result: Result) -> dict[str, Any]:
    """Result as plain mappings, lists, numbers and text, in the order of the schema.

    Parameters
    ----------
    result : Result
        What a comparison found; the drawing is left out.

    Returns
    -------
    dict
        Ready for :func:`json.dumps`; no time stamp outside ``provenance``.
    """
    origin = result.provenance
    return {
        "schema": SCHEMA,
        "title": result.title,
        "units": {"length": result.length_unit, "force": result.force_unit},
        "per_modulus": result.per_modulus,
        "judged": result.judged,
        "quantities": [_quantity(row) for row in result.quantities],
        "flows": [_flow(flow) for flow in result.flows],
        "theory_peaks": [
            {
                "kind": peak.kind,
                "load": peak.load,
                "wall": peak.wall,
                "s": peak.s,
                "x": peak.x,
                "y": peak.y,
                "value": peak.value,
                "has_fe": peak.has_fe,
            }
            for peak in result.theory_peaks
        ],
        "stresses": _records(result.stresses),
        "boom_fibres": _records(result.boom_fibres),
        "fillet_peaks": _records(result.fillet_peaks),
        "envelope": {
            "walls": _records(result.wall_envelopes),
            "probes": _records(result.probe_envelopes),
        },
        "walls_by_loads": _records(result.walls_by_loads),
        "margins": _records(result.margins),
        "named_probes": _records(result.named_probes),
        "load_kinds": dict(result.load_kinds),
        "overall": None if result.overall is None else list(result.overall),
        "models": None if result.models is None else asdict(result.models),
        "stiffness": [_property(row) for row in result.stiffness],
        "indicators": [_property(row) for row in result.indicators],
        "poisson": {
            "nu": result.nu,
            "reason": result.nu_reason,
            "shear_centre": "at zero mean twist",
            "shear_coefficients": [_property(row) for row in result.shear_coefficients],
        },
        "stated": _records(result.stated),
        "causes": [
            {
                "quantity": cause.quantity,
                "load": cause.load,
                "step": cause.step,
                "change": cause.change,
                "uncertainty": cause.uncertainty,
                "note": cause.note,
            }
            for cause in result.causes
        ],
        "working": None if result.working is None else dict(result.working),
        "mesh": {
            "order": result.mesh.order,
            "unknowns": result.mesh.unknowns,
            "elements": result.mesh.elements,
            "strips": result.mesh.strips,
            "joints": result.mesh.joints,
        },
        "accuracy": {
            "asked": result.accuracy,
            "met": result.accuracy_met,
            "note": result.accuracy_note,
        },
        "outline_notes": list(result.outline_notes),
        "theory_notes": {level: list(notes) for level, notes in result.theory_notes.items()},
        "notes": list(result.section_notes),
        "checks": [
            {"name": check.name, "value": check.value, "allowed": check.allowed, "passed": check.passed}
            for check in result.checks
        ],
        "provenance": {
            "section_file": origin.section_file,
            "sha256": origin.sha256,
            "tables": dict(origin.tables),
            "version": origin.version,
            "packages": dict(origin.packages),
            "python": origin.python,
            "seconds": dict(origin.seconds),
        },
    }


def _quantity(row: QuantityResult) -> dict[str, Any]:
    """One row."""
    return {
        "name": row.name,
        "symbol": row.symbol,
        "unit": row.unit,
        "load": row.load,
        "theory": dict(row.theory),
        "theory_reasons": dict(row.theory_reasons),
        "fe": _fe(row.fe),
        "difference": dict(row.difference),
        "normaliser": row.normaliser,
        "uncertainty": row.uncertainty,
        "criterion": row.criterion,
        "criterion_source": row.criterion_source,
        "verdict": row.verdict,
        "effect": None if row.effect is None else dict(row.effect),
        "factor": row.factor,
        "reason": row.reason,
        "note": row.note,
    }


def _fe(value: FeValue) -> dict[str, Any]:
    """FE's value and interval."""
    return {
        "value": value.value,
        "low": value.low,
        "high": value.high,
        "basis": value.basis,
        "with_nu": value.with_nu,
        "with_nu_reason": value.nu_reason,
    }


def _property(row: PropertyRow) -> dict[str, Any]:
    """A stiffness or an indicator."""
    return {
        "name": row.name,
        "symbol": row.symbol,
        "words": row.words,
        "unit": row.unit,
        "theory": dict(row.theory),
        "theory_reasons": dict(row.theory_reasons),
        "fe": _fe(row.fe),
        "fe_reason": row.fe.reason if row.fe.value is None else None,
    }


def _records(entries: Iterable[Any]) -> list[dict[str, Any]]:
    """Plain records, keys in the order of their fields."""
    return [asdict(entry) for entry in entries]


def _flow(flow: WallFlow) -> dict[str, Any]:
    """Flows of one load in one wall."""
    return {
        "load": flow.load,
        "wall": flow.wall,
        "unit": flow.unit,
        "difference": flow.difference,
        "normaliser": flow.normaliser,
        "reason": flow.reason,
        "probes": [
            {
                "s": probe.s,
                "x": probe.x,
                "y": probe.y,
                "theory": probe.theory,
                "levels": dict(probe.levels),
                "fe": probe.fe,
                "fe_error": probe.fe_error,
                "label": probe.label,
            }
            for probe in flow.probes
        ],
    }


def json_text(results: Sequence[Result]) -> str:
    """JSON of one result, or of several wrapped in a list under ``results``; ends with a newline.

    Raises
    ------
    ValueError
        Where a number is not finite: JSON has no word for it, and no result should hold it.
    """
    return documents_text([document(result) for result in results])


def documents_text(documents: Sequence[dict[str, Any]]) -> str:
    """JSON of documents as :func:`document` gives them; see :func:`json_text`."""
    try:
        if len(documents) == 1:
            return f"{_record_a_line(documents[0])}\n"
        inside = ",\n".join(_record_a_line(each) for each in documents)
        return f'{{\n "schema": "{SEVERAL_SCHEMA}",\n "results": [\n{inside}\n]\n}}\n'
    except ValueError:
        for number, each in enumerate(documents):
            _refuse_not_finite(each, "result" if len(documents) == 1 else f"results[{number}]")
        raise


def _record_a_line(content: Mapping[str, Any]) -> str:
    """A mapping as JSON, a line for every key and every record of a list, so that runs can be compared."""
    return "{\n" + ",\n".join(f" {_text(key)}: {_value(value)}" for key, value in content.items()) + "\n}"


def _value(value: Any) -> str:
    """A value on one line; a list of records, and a mapping of such lists, with a line for each record."""
    if isinstance(value, list) and value and all(isinstance(entry, Mapping) for entry in value):
        return "[\n" + ",\n".join(f"  {_text(entry)}" for entry in value) + "\n ]"
    if isinstance(value, Mapping) and any(isinstance(entry, list) and entry for entry in value.values()):
        return "{" + ", ".join(f"{_text(key)}: {_value(entry)}" for key, entry in value.items()) + "}"
    return _text(value)


def _text(value: Any) -> str:
    return json.dumps(value, ensure_ascii=False, allow_nan=False)


def _refuse_not_finite(content: Any, where: str) -> None:
    """Name the place of a NaN or infinity instead of only refusing it."""
    if isinstance(content, Mapping):
        for key, value in content.items():
            _refuse_not_finite(value, f"{where}.{key}")
    elif isinstance(content, (list, tuple)):
        for i, value in enumerate(content):
            _refuse_not_finite(value, f"{where}[{i}]")
    elif isinstance(content, float) and not math.isfinite(content):
        raise ValueError(f"{where} is {content}: a result holds finite numbers or null with a reason")
