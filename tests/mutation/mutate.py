"""How many small changes of the formulas does the verification suite miss? Run by hand; prints survivors.

    python tests/mutation/mutate.py --sample 400 --seed 1 [--processes 2] [--only beam_theory/flow.py ...]
                                    [--again FILE]

What counts as a formula, and what is left out and why, stands in `mutants.py`; the files are all of
beam_theory but its plain data and the finding of input faults (LEFT_OUT), and the modules of fe_models that
compute (FE_FORMULAS): the others draw, mesh, or write files.

Mutants are judged in stages: quick code checks and rows of theory, all other code checks, all other rows.
Each stage runs its checks once without a change and notes the lines of both packages that they run. A mutant
then lives in a process forked from that one, which runs the checks that come by its line, the cheapest first,
until one fails. It is found when a check fails or the code breaks down, or when a check needs more than its
limit of processor time (told apart). What was kept from before the change is forgotten, but for what finite
elements gave where theory is changed, in which no line of theory has a part. A survivor has passed the whole
suite. With --again only those that survive in an earlier print are tried.
"""

from __future__ import annotations

import argparse
import importlib
import math
import os
import random
import resource
import signal
import sys
import time
import warnings
from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from types import FrameType
from typing import Any

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parent)]

from checks import Check, forget, suite_checks
from memory import Memory
from mutants import ROOT, Mutant, mutants, mutated
from transplant import transplant

FE_FORMULAS = (
    "element", "space", "poisson", "stress_function", "jumps", "intervals", "quantities", "contour", "fields",
    "recovery",
)  # fmt: skip
LEFT_OUT = {"__init__.py", "arrays.py", "errors.py", "quantity.py", "section.py"}
# Processor time of a check with a change in it: so many times its own, and so many seconds more.
TIMES, SECONDS = 4.0, 10.0
# Memory that a mutant may take beside what its parent has [bytes].
MEMORY = 8 * 2**30
Lines = frozenset[tuple[str, int]]


@dataclass(frozen=True)
class Judge:
    """A check of the suite: its cost [s of processor time] and the lines of both packages that it runs."""

    name: str
    passes: Callable[[], bool]
    seconds: float
    lines: Lines


def formula_files() -> list[str]:
    """All of beam_theory but its plain data, and the formula modules of fe_models."""
    theory = sorted(p.name for p in (ROOT / "beam_theory").glob("*.py"))
    found = [f"beam_theory/{name}" for name in theory if name not in LEFT_OUT]
    return found + [f"fe_models/{name}.py" for name in FE_FORMULAS]


def stages() -> list[list[Check]]:
    """Quick code checks and rows of theory, all other code checks, all other rows."""
    quick, codes = suite_checks(quick=True), {name for name, _ in suite_checks(rows=False)}
    first = {name for name, _ in quick}
    rest = [check for check in suite_checks() if check[0] not in first]
    return [list(quick), [c for c in rest if c[0] in codes], [c for c in rest if c[0] not in codes]]


def judges(checks: Sequence[Check]) -> list[Judge]:
    """Checks without any change, the cheapest first, with the lines that they run."""
    found = []
    packages = tuple(str(ROOT / package) + os.sep for package in ("beam_theory", "fe_models"))
    for name, passes in checks:
        forget()
        lines: set[tuple[str, int]] = set()

        def local(frame: FrameType, event: str, _: Any, seen: set[tuple[str, int]] = lines) -> Any:
            seen.add((frame.f_code.co_filename, frame.f_lineno))
            return local

        def enter(frame: FrameType, event: str, _: Any) -> Any:
            return local(frame, event, _) if frame.f_code.co_filename.startswith(packages) else None

        begun = time.process_time()
        sys.settrace(enter)
        good = passes()
        sys.settrace(None)
        if not good:
            raise SystemExit(f"fails without any change: {name}")
        seconds = time.process_time() - begun
        relative = frozenset((str(Path(file).relative_to(ROOT)), line) for file, line in lines)
        found.append(Judge(name, passes, seconds, relative))
    return sorted(found, key=lambda judge: judge.seconds)


def concerned(mutant: Mutant, among: Sequence[Judge]) -> list[Judge]:
    """Checks that come by the statement of a mutant; all that touch its file where it runs on import."""
    first, last = mutant.lines
    if last == 0:
        return [judge for judge in among if any(path == mutant.path for path, _ in judge.lines)]
    return [
        judge for judge in among if any((mutant.path, line) in judge.lines for line in range(first, last + 1))
    ]


def _live(mutant: Mutant, among: Sequence[Judge], memory: Memory, write: int) -> None:
    """A mutant's life: told is "S" that it survived, or "F" and what found it."""
    null = os.open(os.devnull, os.O_WRONLY)
    os.dup2(null, 1)
    os.dup2(null, 2)
    warnings.simplefilter("ignore")
    has = int(Path("/proc/self/statm").read_text().split()[0]) * resource.getpagesize()
    resource.setrlimit(resource.RLIMIT_AS, (has + MEMORY, has + MEMORY))
    forget()
    memory.replay = mutant.path.startswith("beam_theory")
    try:
        transplant(importlib.import_module(mutant.module), mutated(mutant))
        for judge in among:
            signal.setitimer(signal.ITIMER_PROF, SECONDS + TIMES * judge.seconds)
            if not judge.passes():
                os.write(write, f"F{judge.name}".encode())
                return
    except BaseException as fault:
        os.write(write, f"F{type(fault).__name__}".encode())
        return
    os.write(write, b"S")


def outcomes(
    chosen: Sequence[Mutant],
    every: Sequence[Judge],
    memory: Memory,
    processes: int,
    tell: Callable[[Mutant, str, int], None],
) -> None:
    """Tell what came of each mutant, "S", "F" and a name, "T" for too much time, and how many judged it."""
    waiting = list(reversed(chosen))
    living: dict[int, tuple[Mutant, int, int]] = {}
    while waiting or living:
        while waiting and len(living) < processes:
            mutant = waiting.pop()
            among = concerned(mutant, every)
            read, write = os.pipe()
            child = os.fork()
            if child == 0:
                os.close(read)
                _live(mutant, among, memory, write)
                os._exit(0)
            os.close(write)
            living[child] = (mutant, read, len(among))
        child, status = os.wait()
        mutant, read, count = living.pop(child)
        told = os.read(read, 400).decode()
        os.close(read)
        if os.WIFSIGNALED(status):
            told = "T" if os.WTERMSIG(status) == signal.SIGPROF else "Fthe process broke down"
        tell(mutant, told, count)


def interval(part: int, of: int) -> tuple[float, float]:
    """Wilson's interval of a share, 95 %.

    References
    ----------
    E. B. Wilson, Probable inference, the law of succession, and statistical inference, J. Am. Stat. Assoc.
    22, 1927, 209-212 (from memory).
    """
    z, share = 1.96, part / of
    middle, spread = share + z**2 / (2 * of), z * math.sqrt(share * (1 - share) / of + z**2 / (4 * of**2))
    return (middle - spread) / (1 + z**2 / of), (middle + spread) / (1 + z**2 / of)


def main(arguments: Sequence[str]) -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawTextHelpFormatter)
    parser.add_argument("--sample", type=int, default=400)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--processes", type=int, default=1)
    parser.add_argument("--only", nargs="*", default=None)
    parser.add_argument("--again", type=Path, default=None)
    asked = parser.parse_args(arguments)
    every = [m for path in asked.only or formula_files() for m in mutants(path)]
    if asked.again:
        before = {line.rsplit("  (", 1)[0] for line in asked.again.read_text().splitlines()}
        every = [m for m in every if f"{m.path}:{m.line}: {m.told}" in before]
    chosen = random.Random(asked.seed).sample(every, min(asked.sample, len(every)))
    memory = Memory()
    told: dict[str, list[Mutant]] = {"S": [], "F": [], "T": []}
    found: Counter[str] = Counter()
    left = chosen
    for number, checks in enumerate(stages(), 1):
        begun = time.time()
        found_by = judges(checks)
        own = sum(judge.seconds for judge in found_by)
        print(f"# stage {number}: {len(checks)} checks, {own:.0f} s, {len(left)} mutants", flush=True)
        told["S"] = []

        def tell(mutant: Mutant, came: str, count: int) -> None:
            told[came[0]].append(mutant)
            found[came[1:]] += came[0] == "F"
            if came[0] == "S":
                print(f"{mutant.path}:{mutant.line}: {mutant.told}  ({count} checks)", flush=True)

        outcomes(left, found_by, memory, asked.processes, tell)
        left = told["S"]
        print(f"# {len(left)} of {len(chosen)} left, {time.time() - begun:.0f} s", flush=True)
    n, alive = len(chosen), len(told["S"])
    low, high = interval(alive, n)
    print(
        f"{len(every)} mutants, {n} tried: {len(told['F'])} found, {len(told['T'])} ran into the limit of "
        f"time, {alive} survive: {100 * alive / n:.1f} % ({100 * low:.1f} to {100 * high:.1f} %)"
    )
    tried, lost = Counter(m.path for m in chosen), Counter(m.path for m in told["S"])
    for path in sorted(tried):
        print(f"  {path}: {lost[path]} of {tried[path]}")
    for name, count in found.most_common(15):
        print(f"  {count:4d} found by {name}")
    return 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
