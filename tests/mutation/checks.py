"""The checks of the verification suite as functions that say whether they pass, quick ones first."""

from __future__ import annotations

from collections.abc import Callable

from crosscheck.verification.code_checks import code_checks


def suite_checks() -> list[tuple[str, Callable[[], bool]]]:
    """Name and function of every code check; what earlier checks have solved is forgotten first."""
    ordered = sorted(code_checks(), key=lambda c: not c.quick)
    return [(c.name, lambda run=c.run: run().passed) for c in ordered]  # type: ignore[misc]
