"""Numbers of a section file: parameters in order, overrides, arithmetic resolved, bounds kept."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from crosscheck.faults import ExpressionError, FaultList, KeyPath, one_line, quoted, shown
from crosscheck.section_file.arithmetic import ALLOWED, RESERVED_NAMES, evaluate, is_name, names_in
from crosscheck.section_file.keys import NUMBER_LIMIT

Overrides = Iterable[str] | Mapping[str, float | str]


@dataclass(frozen=True)
class Bound:
    """A condition on a number and its words, which complete "must be ..."."""

    words: str
    holds: Callable[[float], bool]


ANY = Bound("a number", lambda value: True)
POSITIVE = Bound("> 0", lambda value: value > 0.0)
NOT_NEGATIVE = Bound(">= 0", lambda value: value >= 0.0)
SHARE = Bound("from 0 to 1", lambda value: 0.0 <= value <= 1.0)
BELOW_ONE = Bound("> 0 and < 1", lambda value: 0.0 < value < 1.0)
ANGLE = Bound("from 1 to 179 degrees", lambda value: 1.0 <= value <= 179.0)
POISSON = Bound("> -1 and <= 0.5", lambda value: -1.0 < value <= 0.5)


class Numbers:
    """Resolves what a file writes as numbers; faults go to one list, a faulty number is None.

    Parameters
    ----------
    faults : receives the faults
    parameters : names and numbers or arithmetic, in file order
    overrides : "t = 2.5" texts, or a mapping of names to numbers or arithmetic
    declared : all parameter names of the file, faulty ones too
    """

    def __init__(
        self,
        faults: FaultList,
        parameters: Mapping[str, Any],
        overrides: Overrides = (),
        declared: Iterable[str] = (),
    ) -> None:
        self.faults = faults
        self.values: dict[str, float] = {}
        self._circular: set[str] = set()  # names in circles that are noted
        self._declared = set(declared) | set(parameters)
        self.overrides = self._read_overrides(overrides)
        texts = dict(parameters) | self.overrides
        order = {name: index for index, name in enumerate(texts)}
        for name, raw in texts.items():
            self._add_parameter(name, raw, texts, order)

    def number(self, path: KeyPath, raw: Any, bound: Bound = ANY) -> float | None:
        """The number at a key path, or None when it is absent or faulty.

        Parameters
        ----------
        path : where it stands
        raw : number or arithmetic as read; None when it is absent
        bound : what it must fulfil
        """
        return None if raw is None else self._resolve(path, raw, bound, None)

    def pair(self, path: KeyPath, raw: Any) -> tuple[float, float] | None:
        """Two numbers at a key path, or None."""
        if raw is None:
            return None
        first, second = (self.number((*path, i), entry) for i, entry in enumerate(raw))
        return None if first is None or second is None else (first, second)

    def _resolve(self, path: KeyPath, raw: Any, bound: Bound, key: str | None) -> float | None:
        found = shown(raw)
        try:
            value = evaluate(raw, self.values) if isinstance(raw, str) else float(raw)
        except OverflowError:
            self.faults.add(path, found, f"a number of magnitude at most {NUMBER_LIMIT:g}", key=key)
            return None
        except ExpressionError as error:
            # What is wrong with a parameter is said where it is defined, once.
            if error.name is None or error.name not in self._declared:
                near = None if error.name is None else (error.name, (*self.values, *RESERVED_NAMES))
                self.faults.add(path, found, ALLOWED, error.reason, near=near, key=key)
            return None
        if isinstance(raw, str):
            found = f"{value:.6g} from {found}"
        if value != 0.0 and not 1.0 / NUMBER_LIMIT <= abs(value) <= NUMBER_LIMIT:
            words = f"0 or of magnitude {1 / NUMBER_LIMIT:g} to {NUMBER_LIMIT:g}"
            self.faults.add(path, found, words, key=key)
            return None
        if not bound.holds(value):
            self.faults.add(path, found, bound.words, key=key)
            return None
        return value

    def _add_parameter(self, name: str, raw: Any, texts: Mapping[str, Any], order: Mapping[str, int]) -> None:
        path: KeyPath = ("parameters", name)
        key = f"set {quoted(f'{name} = {raw}')}" if name in self.overrides else None
        if not is_name(name):
            reserved = ", ".join(sorted(RESERVED_NAMES))
            words = f"named by at most 60 letters a-z, digits and _, a letter first, not {reserved}"
            self.faults.add(path, quoted(name), words)
            return
        if isinstance(raw, str):
            waiting = [used for used in names_in(raw) if order.get(used, -1) >= order[name]]
            if waiting and name in self._circular:
                return
            if waiting:
                circle = None if self.faults.full else _circle(name, texts)
                reason = (
                    f"circular: {' -> '.join(circle)}"
                    if circle
                    else f"{quoted(waiting[0])} comes later in the file: move it up"
                )
                self._circular.update(circle or ())
                words = "a number or arithmetic on parameters that stand earlier in the file"
                self.faults.add(path, shown(raw), words, one_line(reason, 200), key=key)
                return
        value = self._resolve(path, raw, ANY, key)
        if value is not None:
            self.values[name] = value

    def _read_overrides(self, overrides: Overrides) -> dict[str, Any]:
        """Names and numbers or texts of overrides; those of unknown parameters are faults."""
        read: dict[str, Any] = {}
        if isinstance(overrides, str):
            overrides = (overrides,)
        entries = (
            [(str(name), value, f"{name} = {value}") for name, value in overrides.items()]
            if isinstance(overrides, Mapping)
            else [
                (text.partition("=")[0].strip(), text.partition("=")[2].strip(), text) for text in overrides
            ]
        )
        for name, value, text in entries:
            key = f"set {quoted(text)}"
            if value == "" or not name:
                self.faults.add((), quoted(text), 'of the form "name = value"', key=key)
            elif name not in self._declared:
                known = sorted(self._declared)
                words = "a parameter of [parameters]" if known else "left out: the file has no [parameters]"
                self.faults.add((), quoted(name), words, near=(name, known), key=key)
            elif isinstance(value, bool) or not isinstance(value, (int, float, str)):
                self.faults.add((), shown(value), ALLOWED, key=key)
            elif name in read and read[name] != value:
                self.faults.add((), "a second value", "given once", key=key)
            else:
                read[name] = value.strip("\"'") if isinstance(value, str) else value
        return read


def _circle(name: str, texts: Mapping[str, Any]) -> list[str] | None:
    """Names along a circle of parameters from a name back to itself, or None."""
    came_from: dict[str, str] = {}
    waiting = [name]
    while waiting:
        at = waiting.pop()
        raw = texts[at]
        for used in names_in(raw) if isinstance(raw, str) else ():
            if used == name:
                circle = [name, at]
                while circle[-1] != name:
                    circle.append(came_from[circle[-1]])
                return circle[::-1]
            if used in texts and used not in came_from:
                came_from[used] = at
                waiting.append(used)
    return None
