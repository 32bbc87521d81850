"""The whole verification suite as functions that say whether they pass, the quick ones first."""

from __future__ import annotations

import sys
from collections.abc import Callable
from functools import cache, partial
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[2]))

from crosscheck.verification.check import CodeCheck
from crosscheck.verification.code_checks import code_checks
from crosscheck.verification.suite import Job, plan, run_job

Check = tuple[str, Callable[[], bool]]


@cache
def suite_checks(side: str | None = None, rows: bool = True, quick: bool = False) -> tuple[Check, ...]:
    """Name and function of every job of the suite that has to do with a side, or of all.

    side: "theory" or "fe"; None for all. rows: reference rows as well as code checks. quick: of code
    checks and of rows that need finite elements only those of the quick run.
    """
    jobs: tuple[Job, ...] = plan().jobs if rows else code_checks()
    chosen = [job for job in jobs if side is None or _of(job, side)]
    if quick:
        chosen = [job for job in chosen if job.quick or not (isinstance(job, CodeCheck) or job.needs_fe)]
    chosen.sort(key=_cost)
    return tuple((_name(job), partial(_passes, job)) for job in chosen)


def forget() -> None:
    """Drop what earlier checks of this process have kept."""
    for module in list(sys.modules.values()):
        if getattr(module, "__name__", "").startswith(("beam_theory", "fe_models", "crosscheck")):
            for value in list(vars(module).values()):
                if hasattr(value, "cache_clear") and "lru_cache" in type(value).__name__:
                    value.cache_clear()


def _passes(job: Job) -> bool:
    return all(outcome.passed for outcome in run_job(job))


def _name(job: Job) -> str:
    """Unique: rows of two files may bear one name."""
    return job.name if isinstance(job, CodeCheck) else f"{job.file}: {job.name}"


def _cost(job: Job) -> int:
    """Quick code checks of one side, then of both, theory's rows, and what takes longer."""
    if isinstance(job, CodeCheck):
        return (0 if job.side != "both" else 1) if job.quick else 3
    return 4 if job.needs_fe else 2


def _of(job: Job, side: str) -> bool:
    if isinstance(job, CodeCheck):
        return job.side in (side, "both")
    return any(side in row.sides or row.kind != "value" for row in job.rows)
