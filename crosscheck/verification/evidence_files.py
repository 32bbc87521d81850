"""The evidence as JSON and as JUnit XML."""

from __future__ import annotations

import json
import math
from typing import Any
from xml.etree import ElementTree

from crosscheck.comparison.provenance import PACKAGES, installed_version
from crosscheck.verification.check import CheckOutcome
from crosscheck.verification.evidence import headline, obtained_counts
from crosscheck.verification.judging import RowOutcome
from crosscheck.verification.statements import COMMON_CAUSES, DOMAIN_OF_USE
from crosscheck.verification.suite import SuiteResult

SCHEMA = "crosscheck.verification/1"
# Characters that XML 1.0 cannot hold.
_NOT_IN_XML = {code: " " for code in range(32) if chr(code) not in "\t\n\r"}


def json_bytes(result: SuiteResult) -> bytes:
    """Everything in full precision; no time stamp, times only under `seconds`."""
    document = {
        "schema": SCHEMA,
        "passed": not result.failures,
        "headline": headline(result),
        "quick": result.quick,
        "whole": result.whole,
        "seconds": result.seconds,
        "version": installed_version("crosscheck"),
        "packages": {name: installed_version(name) for name in PACKAGES},
        "obtained": obtained_counts(result.rows),
        "coverage": {
            name: {"theory": c.theory, "fe": c.fe, "difference": c.difference, "checks": c.checks}
            for name, c in result.coverage.items()
        },
        "outcomes": [outcome_keys(outcome) for outcome in result.outcomes],
        "domain_of_use": list(DOMAIN_OF_USE),
        "common_causes": list(COMMON_CAUSES),
    }
    return (json.dumps(document, ensure_ascii=False, indent=1, allow_nan=False) + "\n").encode()


def outcome_keys(outcome: CheckOutcome) -> dict[str, Any]:
    """One outcome as JSON keys; what is no finite number is null."""
    keys: dict[str, Any] = {
        "name": outcome.name,
        "group": outcome.group,
        "side": outcome.side,
        "passed": outcome.passed,
        "value": _number(outcome.value),
        "allowed": _number(outcome.allowed),
        "share": _number(outcome.share),
        "detail": outcome.detail,
        "features": sorted(outcome.features),
        "seconds": outcome.seconds,
    }
    if isinstance(outcome, RowOutcome):
        return keys | {
            "case": outcome.case,
            "section": outcome.section,
            "quantity": outcome.quantity,
            "asked": outcome.asked or None,
            "level": outcome.level or None,
            "unit": outcome.unit or None,
            "found": _number(outcome.found),
            "fe_half_width": _number(outcome.half),
            "expected": _number(outcome.expected),
            "printed": outcome.printed,
            "tolerance": outcome.tolerance,
            "tolerance_why": outcome.why,
            "source": outcome.source.text,
            "place": outcome.place,
            "obtained": outcome.obtained,
            "note": outcome.note or None,
            "known_problem": outcome.known_problem or None,
        }
    return keys | {"series": {name: _series(series) for name, series in outcome.series.items()}}


def junit_bytes(result: SuiteResult) -> bytes:
    """One test case an outcome, one suite a group."""
    top = ElementTree.Element("testsuites", _counts("crosscheck verify", result.outcomes, result.seconds))
    for group in dict.fromkeys(outcome.group for outcome in result.outcomes):
        own = [outcome for outcome in result.outcomes if outcome.group == group]
        suite = ElementTree.SubElement(
            top, "testsuite", _counts(group, own, sum(outcome.seconds for outcome in own))
        )
        for outcome in own:
            where = outcome.source.text if isinstance(outcome, RowOutcome) else group
            case = ElementTree.SubElement(
                suite,
                "testcase",
                {"name": _xml(outcome.name), "classname": _xml(where), "time": f"{outcome.seconds:.4f}"},
            )
            if not outcome.passed:
                failure = ElementTree.SubElement(case, "failure", {"message": _xml(outcome.detail)})
                failure.text = _xml(outcome.detail)
            else:
                ElementTree.SubElement(case, "system-out").text = _xml(outcome.detail)
    ElementTree.indent(top)
    return bytes(ElementTree.tostring(top, encoding="utf-8", xml_declaration=True)) + b"\n"


def _counts(name: str, outcomes: Any, seconds: float) -> dict[str, str]:
    failed = sum(not outcome.passed for outcome in outcomes)
    return {
        "name": _xml(name),
        "tests": str(len(outcomes)),
        "failures": str(failed),
        "errors": "0",
        "skipped": "0",
        "time": f"{seconds:.3f}",
    }


def _xml(text: str) -> str:
    return text.translate(_NOT_IN_XML)


def _number(value: float) -> float | None:
    return value if math.isfinite(value) else None


def _series(series: Any) -> dict[str, Any]:
    return {
        "x": [_number(v) for v in series.x],
        "y": [_number(v) for v in series.y],
        "x_label": series.x_label,
        "y_label": series.y_label,
        "slope": series.slope,
        "expected": series.expected,
    }
