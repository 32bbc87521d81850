"""Prints which checks each deliberate fault turns red.

    python tests/verification/faults/matrix.py [PART OF A FAULT'S NAME] [--covering] [--quick]

With --covering each fault runs only the checks that no fault before it has turned red, and others only until
one fails: enough to see that every fault and every check is accounted for, in a few minutes. With --quick
the checks are those of the quick run and theory's rows.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Sequence
from pathlib import Path

sys.path[:0] = [str(Path(__file__).parents[3]), str(Path(__file__).parent)]

import injection
from checks import suite_checks


def main(arguments: Sequence[str]) -> int:
    covering, quick = "--covering" in arguments, "--quick" in arguments
    wanted = [a for a in arguments if not a.startswith("--")]
    unseen = {name for name, _ in suite_checks(quick=quick)}
    silent = []
    memory = injection.without_faults() if covering and not quick else None
    for fault in injection.CATALOGUE:
        if wanted and not any(w in fault.name for w in wanted):
            continue
        start = time.time()
        checks = suite_checks(injection.side(fault), quick=quick)
        first = [c for c in checks if c[0] in unseen] if covering else checks
        red = injection.turned_red(fault, first, [c for c in checks if c not in first], memory)
        unseen -= set(red)
        if not red:
            silent.append(fault.name)
        print(f"{fault.path}: {fault.name}: {len(red)} red, {time.time() - start:.0f} s", flush=True)
        for name in red[:3] if covering else red:
            print(f"    {name}")
    print(f"faults that nothing sees: {silent}")
    print(f"checks that no fault turned red: {len(unseen)}")
    for name in sorted(unseen):
        print(f"    {name}")
    return 1 if silent or unseen else 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
