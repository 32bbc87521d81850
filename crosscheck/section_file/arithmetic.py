"""Arithmetic on parameters: a bounded recursive-descent evaluator that runs nobody's code.

    sum     = product { ("+" | "-") product }
    product = signed { ("*" | "/") signed }
    signed  = { "+" | "-" } power
    power   = atom [ "**" signed ]
    atom    = number | name | "pi" | function "(" sum ")" | "(" sum ")"

Precedence is that of written mathematics: -2 ** 2 is -4, 2 ** 3 ** 2 is 512. Angles are in degrees.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping

from crosscheck.faults import ExpressionError, quoted

ALLOWED = "a number or arithmetic on parameters (+ - * / ** ( ) sqrt sin cos tan pi)"
TEXT_LIMIT = 300
NESTING_LIMIT = 40
EXPONENT_LIMIT = 64.0
# Powers and products up to a section's I_w [L^6] stay far inside; nothing overflows on the way.
INTERMEDIATE_LIMIT = 1e60

_TOKEN = re.compile(
    r"[ \t]*(?:(?P<number>(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?)"
    r"|(?P<name>[A-Za-z_][A-Za-z0-9_]*)|(?P<sign>\*\*|[-+*/()]))"
)
_NAME = re.compile(r"[A-Za-z_][A-Za-z0-9_]*\Z")
_HINTS = {
    "^": "a power is written **",
    ",": "a decimal point is written as a point",
    "\u2212": "a minus is written - (hyphen)",
    "\u00d7": "a product is written *",
    "\u00b7": "a product is written *",
    "\u00b0": "angles are in degrees without a sign",
    "%": "a share is written as a number, 5 % as 0.05",
}


def _square_root(value: float) -> float:
    if value < 0.0:
        raise ExpressionError(f"square root of a negative number ({value:.6g})")
    return math.sqrt(value)


def _quadrant(degrees: float) -> tuple[int, float]:
    """Quarter turns and the remaining angle in radians, exact at multiples of 90 degrees."""
    rest = math.remainder(degrees, 90.0)
    return round((math.fmod(degrees, 360.0) - rest) / 90.0) % 4, math.radians(rest)


def sine(degrees: float) -> float:
    """Sine of an angle in degrees, exactly 0 or +-1 at multiples of 90."""
    quarter, rest = _quadrant(degrees)
    value = math.sin(rest) if quarter % 2 == 0 else math.cos(rest)
    return -value if quarter >= 2 else value


def cosine(degrees: float) -> float:
    """Cosine of an angle in degrees, exactly 0 or +-1 at multiples of 90."""
    quarter, rest = _quadrant(degrees)
    value = math.cos(rest) if quarter % 2 == 0 else math.sin(rest)
    return -value if quarter in (1, 2) else value


def tangent(degrees: float) -> float:
    """Tangent of an angle in degrees.

    Raises
    ------
    ExpressionError : at odd multiples of 90 degrees
    """
    below = cosine(degrees)
    if below == 0.0:
        raise ExpressionError(f"tangent of {degrees:.6g} degrees is infinite")
    return sine(degrees) / below


FUNCTIONS: Mapping[str, Callable[[float], float]] = {
    "sqrt": _square_root,
    "sin": sine,
    "cos": cosine,
    "tan": tangent,
}
RESERVED_NAMES = frozenset((*FUNCTIONS, "pi"))


def is_name(text: str) -> bool:
    """True for a text that arithmetic can use as a parameter's name."""
    return len(text) <= 60 and _NAME.match(text) is not None and text not in RESERVED_NAMES


def names_in(text: str) -> tuple[str, ...]:
    """Names that an expression uses, in order of appearance, without functions and pi."""
    found = [m["name"] for m in _TOKEN.finditer(text[:TEXT_LIMIT]) if m["name"]]
    return tuple(dict.fromkeys(name for name in found if name not in RESERVED_NAMES))


def evaluate(text: str, names: Mapping[str, float]) -> float:
    """Value of an arithmetic expression.

    Parameters
    ----------
    text : the expression, at most 300 characters
    names : values of the names it may use

    Returns
    -------
    float, finite, of magnitude at most 1e60

    Raises
    ------
    ExpressionError : for anything that is not allowed; `.name` is set for an unknown name

    Notes
    -----
    Bounded: 300 characters, 40 levels of nesting, exponents from -64 to 64, every intermediate
    value at most 1e60. All numbers are floats, so no power can grow without limit.

    Examples
    --------
    >>> evaluate("web_depth / 40 + 2 ** -1", {"web_depth": 120.0})
    3.5
    >>> evaluate("100 * sin(30 + 60)", {})
    100.0
    """
    return _Evaluation(text, names).result()


class _Evaluation:
    """One pass over one expression."""

    def __init__(self, text: str, names: Mapping[str, float]) -> None:
        self.names = names
        self.tokens = _tokens(text)
        self.at = 0
        self.depth = 0

    def result(self) -> float:
        value = self.sum()
        if self.at < len(self.tokens):
            raise ExpressionError(self._unexpected())
        return value

    def sum(self) -> float:
        value = self.product()
        while (sign := self._take("+", "-")) is not None:
            other = self.product()
            value = _bounded(value + other if sign == "+" else value - other)
        return value

    def product(self) -> float:
        value = self.signed()
        while (sign := self._take("*", "/")) is not None:
            other = self.signed()
            if sign == "/" and other == 0.0:
                raise ExpressionError("division by zero")
            value = _bounded(value * other if sign == "*" else value / other)
        return value

    def signed(self) -> float:
        # Every nested construct passes through here, so one counter bounds the recursion.
        self.depth += 1
        if self.depth > NESTING_LIMIT:
            raise ExpressionError(f"nested deeper than {NESTING_LIMIT} levels")
        sign = self._take("+", "-")
        if sign is None:
            value = self.power()
        else:
            value = -self.signed() if sign == "-" else self.signed()
        self.depth -= 1
        return value

    def power(self) -> float:
        base = self.atom()
        return base if self._take("**") is None else _power(base, self.signed())

    def atom(self) -> float:
        kind, token = self._next()
        if kind == "number":
            return _bounded(float(token))
        if token == "(":
            return self._inside_brackets()
        if kind != "name":
            self.at -= 1
            raise ExpressionError(self._unexpected())
        if token == "pi":
            return math.pi
        if token in FUNCTIONS:
            if self._take("(") is None:
                raise ExpressionError(f"{token} needs its argument in brackets")
            return _bounded(FUNCTIONS[token](self._inside_brackets()))
        if token not in self.names:
            raise ExpressionError(f"unknown name {quoted(token)}", token)
        return _bounded(self.names[token])

    def _inside_brackets(self) -> float:
        value = self.sum()
        if self._take(")") is None:
            raise ExpressionError(
                "a bracket is not closed" if self.at == len(self.tokens) else self._unexpected()
            )
        return value

    def _take(self, *signs: str) -> str | None:
        if self.at < len(self.tokens) and self.tokens[self.at][1] in signs:
            self.at += 1
            return self.tokens[self.at - 1][1]
        return None

    def _next(self) -> tuple[str, str]:
        if self.at == len(self.tokens):
            raise ExpressionError("it ends too early" if self.tokens else "it is empty")
        self.at += 1
        return self.tokens[self.at - 1]

    def _unexpected(self) -> str:
        kind, token = self.tokens[self.at]
        before = self.tokens[self.at - 1] if self.at else ("", "")
        if kind in ("number", "name") and before[0] in ("number", "name"):
            return f"{quoted(token)} after {quoted(before[1])}: a product is written *"
        return f"{quoted(token)} " + (f"after {quoted(before[1])}" if self.at else "at the start")


def _tokens(text: str) -> list[tuple[str, str]]:
    """Kind ("number", "name", "sign") and text of every token."""
    if len(text) > TEXT_LIMIT:
        raise ExpressionError(f"longer than {TEXT_LIMIT} characters ({len(text)})")
    tokens: list[tuple[str, str]] = []
    at, stop = 0, len(text.rstrip(" \t"))
    while at < stop:
        match = _TOKEN.match(text, at)
        if match is None:
            character = text[at:].lstrip(" \t")[0]
            hint = _HINTS.get(character)
            raise ExpressionError(f"{quoted(character)} is not allowed" + (f": {hint}" if hint else ""))
        kind = match.lastgroup or ""
        tokens.append((kind, match[kind]))
        at = match.end()
    return tokens


def _bounded(value: float) -> float:
    """The value itself when it is finite and not too large."""
    if not math.isfinite(value):
        raise ExpressionError("not a finite number")
    if abs(value) > INTERMEDIATE_LIMIT:
        raise ExpressionError(f"a number larger than {INTERMEDIATE_LIMIT:.0e}")
    return value


def _power(base: float, exponent: float) -> float:
    """base ** exponent within the bounds."""
    if abs(exponent) > EXPONENT_LIMIT:
        raise ExpressionError(
            f"exponent {exponent:.6g} outside -{EXPONENT_LIMIT:.0f} to {EXPONENT_LIMIT:.0f}"
        )
    if base == 0.0 and exponent < 0.0:
        raise ExpressionError("zero to a negative power")
    if base < 0.0 and exponent != math.floor(exponent):
        raise ExpressionError("a negative number to a fractional power")
    try:
        value = math.pow(base, exponent)
    except OverflowError:
        value = math.inf
    if math.isinf(value):
        raise ExpressionError(f"a number larger than {INTERMEDIATE_LIMIT:.0e}")
    if value == 0.0 and base != 0.0:
        raise ExpressionError("a power too small to be told from zero")
    return _bounded(value)
