"""Ranges of a parameter as the command line gives them.

t from 1 to 12 in 23            values at equal distances
slenderness from 1000 to 4 log  values at equal ratios
t in 1, 1.5, 2                  these values
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from crosscheck.faults import ExpressionError, Fault, SectionFaults, nearest, quoted
from crosscheck.section_file.arithmetic import evaluate
from crosscheck.section_file.source import SectionSource

DEFAULT_COUNT = 25
MOST_VALUES = 100_000
FORM = '"NAME from A to B", "NAME from A to B in N", the same with log at its end, or "NAME in A, B, C"'

_RANGE = re.compile(r"\s*(\w+)\s+from\s+(.+?)\s+to\s+(.+?)(?:\s+in\s+(\S+))?(\s+log)?\s*")
_LIST = re.compile(r"\s*(\w+)\s+in\s+(.+?)\s*")


@dataclass(frozen=True)
class Range:
    """Values of one parameter, in the order given.

    ``scale``: "linear", "log" or "list".
    """

    name: str
    values: tuple[float, ...]
    scale: str

    @property
    def words(self) -> str:
        """The range as it would be given."""
        if self.scale == "list":
            return f"{self.name} in {', '.join(f'{value:g}' for value in self.values)}"
        log = " log" if self.scale == "log" else ""
        first, last = self.values[0], self.values[-1]
        return f"{self.name} from {first:.12g} to {last:.12g} in {len(self.values)}{log}"

    @property
    def low(self) -> float:
        """Smallest value."""
        return min(self.values)

    @property
    def high(self) -> float:
        """Largest value."""
        return max(self.values)


def ranges_of(
    texts: Sequence[str], source: SectionSource, overrides: Sequence[str] = ()
) -> tuple[Range, ...]:
    """Ranges of parameters of a section file.

    Parameters
    ----------
    texts : sequence of str
        As given.
    source : SectionSource
        Has the parameters.
    overrides : sequence of str
        Parameters set anew, which cannot be varied as well.

    Raises
    ------
    SectionFaults
        All faults of all texts.
    """
    found: list[Range] = []
    faults: list[Fault] = []
    given = source.document.get("parameters")
    known = list(given) if isinstance(given, Mapping) else []
    fixed = {text.partition("=")[0].strip() for text in overrides}
    for text in texts:
        fault: tuple[str, str, str] | None = None
        read = _read(text)
        if isinstance(read, Range):
            if read.name not in known:
                match = nearest(read.name, known)
                remedy = f"did you mean {quoted(match)}?" if match else ""
                words = "a parameter of [parameters]" if known else "left out: the file has no [parameters]"
                fault = (quoted(read.name), words, remedy)
            elif read.name in fixed or read.name in {other.name for other in found}:
                fault = (f"{quoted(read.name)} a second time", "varied once and not set as well", "")
            else:
                found.append(read)
        else:
            fault = read
        if fault is not None:
            faults.append(Fault(source.path, f"vary {quoted(text)}", *fault))
    if not faults and not 1 <= len(found) <= 2:
        faults.append(Fault(source.path, "vary", f"{len(found)} ranges", "one range or two"))
    if faults:
        raise SectionFaults(faults)
    return tuple(found)


def _read(text: str) -> Range | tuple[str, str, str]:
    """A range, or what was found, what is allowed and the remedy."""
    between = _RANGE.fullmatch(text)
    if between is not None:
        name, *ends, count, log = between.groups()
        numbers = _numbers(ends)
        if isinstance(numbers, tuple):
            return numbers
        wanted = DEFAULT_COUNT if count is None else int(count) if count.isdecimal() else 0
        if not 2 <= wanted <= MOST_VALUES:
            return quoted(count or ""), f"followed by a whole number from 2 to {MOST_VALUES} after in", ""
        first, last = numbers
        if first == last:
            return f"{first:g} twice", "a range between two different ends", ""
        if log and first * last <= 0:
            return (
                f"{first:g} to {last:g}",
                "between ends of one sign, neither zero, for log",
                "leave log out",
            )
        return Range(name, _spaced(first, last, wanted, bool(log)), "log" if log else "linear")
    listed = _LIST.fullmatch(text)
    if listed is not None:
        numbers = _numbers(listed[2].split(","))
        if isinstance(numbers, tuple):
            return numbers
        if len(set(numbers)) < len(numbers):
            return "a value twice", "a list of different values", ""
        return Range(listed[1], tuple(numbers), "list")
    return quoted(text), f"of the form {FORM}", ""


def _numbers(texts: Sequence[str]) -> list[float] | tuple[str, str, str]:
    numbers = []
    for text in texts:
        try:
            numbers.append(evaluate(text, {}))
        except ExpressionError as fault:
            return quoted(text.strip()), "numbers or arithmetic on numbers", fault.reason
    return numbers


def _spaced(first: float, last: float, count: int, log: bool) -> tuple[float, ...]:
    """Values from first to last, both ends exactly."""
    steps = count - 1
    if log:
        inner = [first * (last / first) ** (i / steps) for i in range(1, steps)]
    else:
        inner = [first + (last - first) * i / steps for i in range(1, steps)]
    return (first, *inner, last)
