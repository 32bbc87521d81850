"""Runs the verification suite with a deliberate fault in place, in a forked process."""

from __future__ import annotations

import ast
import importlib
import os
import signal
import sys
import warnings
from collections.abc import Iterable, Sequence
from pathlib import Path

from comparison_faults import COMPARISON
from fault import Fault
from fe_faults import FE
from theory_faults import THEORY

ROOT = Path(__file__).resolve().parents[3]
sys.path.insert(0, str(ROOT / "tests" / "mutation"))

from checks import Check, forget, suite_checks
from memory import Memory
from transplant import transplant

# A fault that makes refinement run on and on is seen as well.
SECONDS = 300
CATALOGUE: tuple[Fault, ...] = (*THEORY, *FE, *COMPARISON)


def side(fault: Fault) -> str | None:
    """The side whose checks can see a fault; None for the comparison."""
    return {"beam_theory": "theory", "fe_models": "fe"}.get(fault.path.split("/")[0])


def altered(fault: Fault) -> ast.Module:
    """The file's tree with the fault in it; the text must stand there exactly once."""
    text = (ROOT / fault.path).read_text(encoding="utf-8")
    if text.count(fault.old) != 1:
        raise ValueError(f"{fault.name}: {fault.old!r} stands {text.count(fault.old)} times in {fault.path}")
    return ast.parse(text.replace(fault.old, fault.new))


def without_faults() -> Memory:
    """Every check passes without a fault; returns what finite elements gave."""
    memory = Memory()
    failing = [name for name, passes in suite_checks() if not passes()]
    assert not failing, f"fail without any fault: {failing}"
    return memory


def turned_red(
    fault: Fault, first: Sequence[Check], then: Iterable[Check] = (), memory: Memory | None = None
) -> list[str]:
    """Names of the checks in ``first`` that fail with a fault; where none does, one of ``then``.

    memory: solutions of finite elements, taken as they are for a fault that is not in them.
    """
    read, write = os.pipe()
    child = os.fork()
    if child == 0:
        os.close(read)
        null = os.open(os.devnull, os.O_WRONLY)
        os.dup2(null, 1)
        os.dup2(null, 2)
        warnings.simplefilter("ignore")
        signal.alarm(SECONDS)
        with os.fdopen(write, "w", buffering=1) as out:
            try:
                forget()
                if memory is not None:
                    memory.replay = side(fault) != "fe"
                module = importlib.import_module(fault.path.removesuffix(".py").replace("/", "."))
                transplant(module, altered(fault))
                red = [out.write(f"{name}\n") for name, passes in first if not passes()]
                for name, passes in () if red else then:
                    if not passes():
                        out.write(f"{name}\n")
                        break
            except BaseException as broken:
                out.write(f"broke down: {type(broken).__name__}: {broken}\n")
        os._exit(0)
    os.close(write)
    with os.fdopen(read) as told:
        red_names = told.read().splitlines()
    _, status = os.waitpid(child, 0)
    return red_names if status == 0 else [*red_names, "no end within the time limit"]
