"""How many small changes of the formulas does the verification suite miss? Run by hand; prints survivors.

    python tests/mutation/mutate.py --sample 400 --seed 1 [--quick] [--only beam_theory/flow.py ...]

Each mutant lives in a forked process that runs the checks of the suite until one fails, quick ones first. A
mutant is found when a check fails, the code breaks down, or the time limit passes. With --quick the
checks are those of the quick run and theory's rows, so that the survivors are an upper bound.
"""

from __future__ import annotations

import argparse
import importlib
import math
import os
import random
import select
import signal
import sys
import time
import warnings
from collections import Counter
from collections.abc import Sequence
from pathlib import Path

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parent)]

from checks import Check, forget, suite_checks
from mutants import ROOT, Mutant, mutants, mutated
from transplant import transplant

FE_FORMULAS = (
    "element", "space", "poisson", "stress_function", "jumps", "intervals", "quantities", "contour", "fields",
    "recovery",
)  # fmt: skip
SECONDS = 150.0


def formula_files() -> list[str]:
    """All of beam_theory but its plain data, and the formula modules of fe_models."""
    theory = sorted(p.name for p in (ROOT / "beam_theory").glob("*.py"))
    left_out = {"__init__.py", "arrays.py", "errors.py", "section.py", "quantity.py"}
    found = [f"beam_theory/{name}" for name in theory if name not in left_out]
    return found + [f"fe_models/{name}.py" for name in FE_FORMULAS]


def outcome(mutant: Mutant, checks: Sequence[Check]) -> str | None:
    """The name of the check that finds a mutant; None where all pass."""
    read, write = os.pipe()
    child = os.fork()
    if child == 0:
        os.close(read)
        signal.alarm(int(SECONDS) + 5)
        try:
            _live(mutant, checks, write)
        except BaseException as fault:
            os.write(write, f"X{type(fault).__name__} on import".encode())
        os._exit(0)
    os.close(write)
    ready, _, _ = select.select([read], [], [], SECONDS)
    told = os.read(read, 400).decode() if ready else "Xtime limit"
    os.close(read)
    if not ready:
        os.kill(child, signal.SIGKILL)
    os.waitpid(child, 0)
    return None if told == "survived" else told[1:] or "the process broke down"


def _live(mutant: Mutant, checks: Sequence[Check], write: int) -> None:
    null = os.open(os.devnull, os.O_WRONLY)
    os.dup2(null, 1)
    os.dup2(null, 2)
    warnings.simplefilter("ignore")
    forget()
    transplant(importlib.import_module(mutant.module), mutated(mutant))
    for name, passes in checks:
        try:
            good = passes()
        except Exception as fault:
            os.write(write, f"X{name} ({type(fault).__name__})".encode())
            return
        if not good:
            os.write(write, f"X{name}".encode())
            return
    os.write(write, b"survived")


def main(arguments: Sequence[str]) -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawTextHelpFormatter)
    parser.add_argument("--sample", type=int, default=400)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--quick", action="store_true")
    parser.add_argument("--only", nargs="*", default=None)
    asked = parser.parse_args(arguments)
    every = [m for path in asked.only or formula_files() for m in mutants(path)]
    chosen = random.Random(asked.seed).sample(every, min(asked.sample, len(every)))
    checks = {side: suite_checks(side, quick=asked.quick) for side in ("theory", "fe")}
    for name, passes in {c for found_by in checks.values() for c in found_by}:
        if not passes():
            raise SystemExit(f"fails without any change: {name}")
    found: Counter[str] = Counter()
    alive: list[Mutant] = []
    begun = time.time()
    for i, mutant in enumerate(chosen):
        by = outcome(mutant, checks["theory" if mutant.path.startswith("beam_theory") else "fe"])
        if by is None:
            alive.append(mutant)
            print(f"{mutant.path}:{mutant.line}: {mutant.told}", flush=True)
        else:
            found[by] += 1
        if (i + 1) % 20 == 0:
            print(
                f"# {i + 1} of {len(chosen)}, {len(alive)} survive, {time.time() - begun:.0f} s", flush=True
            )
    n, share = len(chosen), len(alive) / len(chosen)
    half = 1.96 * math.sqrt(max(share * (1.0 - share), 1.0 / n) / n)
    print(f"{len(every)} mutants, {n} tried, {len(alive)} survive: {100 * share:.1f} % +- {100 * half:.1f} %")
    per_file = Counter(m.path for m in alive)
    tried = Counter(m.path for m in chosen)
    for path in sorted(tried):
        print(f"  {path}: {per_file[path]} of {tried[path]}")
    for name, count in found.most_common(15):
        print(f"  {count:4d} found by {name}")
    return 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
