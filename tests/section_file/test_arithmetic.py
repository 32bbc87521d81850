"""The evaluator: right on what it allows, one clear refusal on everything else."""

from __future__ import annotations

import math
import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from crosscheck.faults import ExpressionError
from crosscheck.section_file.arithmetic import (
    NESTING_LIMIT,
    TEXT_LIMIT,
    cosine,
    evaluate,
    is_name,
    names_in,
    sine,
    tangent,
)

NAMES = {"t": 2.5, "web_depth": 120.0, "x1": -3.0}


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("1", 1.0),
        (" .5 + 5. ", 5.5),
        ("1.5e3", 1500.0),
        ("2E-2", 0.02),
        ("-2 ** 2", -4.0),
        ("2 ** 3 ** 2", 512.0),
        ("2 ** -1", 0.5),
        ("-3 - -3", 0.0),
        ("8 / 4 / 2", 1.0),
        ("7 - 4 - 2", 1.0),
        ("2 + 3 * 4", 14.0),
        ("(2 + 3) * 4", 20.0),
        ("+-+2", -2.0),
        ("web_depth / 40", 3.0),
        ("sqrt(16) * t", 10.0),
        ("0 ** 0", 1.0),
        ("(-2) ** 3", -8.0),
        ("sin(90)", 1.0),
        ("100 * cos(90)", 0.0),
        ("tan(45)", 1.0),
        ("2 * pi", math.tau),
        ("1e1", 10.0),
    ],
)
def test_value(text: str, value: float) -> None:
    assert_allclose(evaluate(text, NAMES), value, rtol=1e-15, atol=0.0)


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("", "it is empty"),
        ("   ", "it is empty"),
        ("2 +", "it ends too early"),
        ("* 2", '"*" at the start'),
        ("2 3", '"3" after "2": a product is written *'),
        ("2t", '"t" after "2": a product is written *'),
        ("2 * (3", "a bracket is not closed"),
        ("2)", '")" after "2"'),
        ("()", '")" after "("'),
        ("2 ^ 3", '"^" is not allowed: a power is written **'),
        ("2,5", '"," is not allowed: a decimal point is written as a point'),
        ("3 \u2212 1", "a minus is written - (hyphen)"),
        ("90\u00b0", "angles are in degrees without a sign"),
        ("5 %", "a share is written as a number"),
        ("1 / 0", "division by zero"),
        ("1 / (t - t)", "division by zero"),
        ("0 ** -1", "zero to a negative power"),
        ("(-8) ** 0.5", "a negative number to a fractional power"),
        ("sqrt(-1)", "square root of a negative number (-1)"),
        ("tan(90)", "tangent of 90 degrees is infinite"),
        ("tan(-270)", "tangent of -270 degrees is infinite"),
        ("sqrt 4", "sqrt needs its argument in brackets"),
        ("9 ** 9 ** 9", "exponent 3.8742e+08 outside -64 to 64"),
        ("10 ** 64 * 10 ** 64", "a number larger than 1e+60"),
        ("1e999", "not a finite number"),
        ("1e200", "a number larger than 1e+60"),
        ("(1e-50) ** 64", "a power too small to be told from zero"),
        ("(1e50) ** 64", "a number larger than 1e+60"),
        ("depth", 'unknown name "depth"'),
        ("nan", 'unknown name "nan"'),
        ("inf", 'unknown name "inf"'),
        ("True", 'unknown name "True"'),
        ("exp(1)", 'unknown name "exp"'),
        ("t(2)", '"(" after "t"'),
        ("__import__('os').system('true')", '"\'" is not allowed'),
        ("t.real", '"." is not allowed'),
        ("t[0]", '"[" is not allowed'),
        ("1 if t else 2", '"if" after "1"'),
        ("lambda: 1", '":" is not allowed'),
        ("t := 1", '":" is not allowed'),
        ("7 // 2", '"/" after "/"'),
        ("7 @ 2", '"@" is not allowed'),
        ("1_000", '"_000" after "1"'),
        ("0x10", '"x10" after "0"'),
        ("1j", '"j" after "1"'),
        ("\u0661 + 1", "is not allowed"),
        ("t\n+ 1", '"\\n" is not allowed'),
        ("t\0", '"\\x00" is not allowed'),
    ],
)
def test_refused(text: str, reason: str) -> None:
    with pytest.raises(ExpressionError) as caught:
        evaluate(text, NAMES)
    assert reason in str(caught.value)
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize(
    "text",
    ["(" * 149 + "1" + ")" * 149, "-" * 299 + "1", "2" + "**2" * 99, "sqrt(" * 45 + "1" + ")" * 45],
)
def test_nesting_is_bounded(text: str) -> None:
    with pytest.raises(ExpressionError, match="nested deeper than 40 levels"):
        evaluate(text, {})


def test_nesting_within_the_bound_works() -> None:
    depth = NESTING_LIMIT - 1
    assert evaluate("(" * depth + "7" + ")" * depth, {}) == 7.0


def test_length_is_bounded_at_once() -> None:
    assert evaluate("1" + "+1" * ((TEXT_LIMIT - 1) // 2), {}) == 1 + (TEXT_LIMIT - 1) // 2
    began = time.perf_counter()
    with pytest.raises(ExpressionError, match="longer than 300 characters"):
        evaluate("9" * 3_000_000, {})
    assert time.perf_counter() - began < 0.1


def test_unknown_name_is_told() -> None:
    with pytest.raises(ExpressionError) as caught:
        evaluate("2 * wed_depth", NAMES)
    assert caught.value.name == "wed_depth"


def test_names_of_an_expression() -> None:
    assert names_in("b * sin(a) + pi * 2e3 + b1 - b") == ("b", "a", "b1")
    assert [is_name(n) for n in ("t", "_t2", "2t", "a-b", "pi", "sqrt", "", "\u00e9", "a" * 61)] == [
        True,
        True,
        *[False] * 7,
    ]


@pytest.mark.parametrize("turns", [-7, -1, 0, 1, 5, 1000])
def test_right_angles_are_exact(turns: int) -> None:
    full = 360.0 * turns
    assert [sine(full + a) for a in (0, 90, 180, 270)] == [0.0, 1.0, 0.0, -1.0]
    assert [cosine(full + a) for a in (0, 90, 180, 270)] == [1.0, 0.0, -1.0, 0.0]
    assert [tangent(full + a) for a in (0, 180)] == [0.0, 0.0]


@settings(derandomize=True)
@given(st.floats(-1e4, 1e4))
def test_angles_are_in_degrees(angle: float) -> None:
    assert_allclose(sine(angle), math.sin(math.radians(angle)), rtol=0.0, atol=1e-11)
    assert_allclose(cosine(angle), math.cos(math.radians(angle)), rtol=0.0, atol=1e-11)


_ATOMS = st.one_of(
    st.floats(0.01, 1000.0).map(repr),
    st.integers(1, 99).map(lambda n: f"{n}.0"),
    st.sampled_from(["t", "web_depth", "x1", "pi"]),
)


def _grown(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    return st.one_of(
        st.tuples(inner, st.sampled_from([" + ", "-", " * ", "/", "**"]), inner).map("".join),
        inner.map(lambda e: f"({e})"),
        inner.map(lambda e: f"-{e}"),
        st.tuples(st.sampled_from(["sqrt", "sin", "cos", "tan"]), inner).map(lambda p: f"{p[0]}({p[1]})"),
    )


@settings(max_examples=400, deadline=None, derandomize=True)
@given(st.recursive(_ATOMS, _grown, max_leaves=12))
def test_same_as_python(text: str) -> None:
    """Against Python's own evaluation of the same text, with the same functions in degrees."""
    functions = {"sqrt": math.sqrt, "sin": sine, "cos": cosine, "tan": tangent, "pi": math.pi}
    try:
        ours = evaluate(text, NAMES)
    except ExpressionError:
        return
    theirs = eval(text, {"__builtins__": {}}, functions | NAMES)  # the oracle; text is made of our grammar
    assert isinstance(theirs, float)
    assert_allclose(ours, theirs, rtol=1e-13, atol=0.0)


@settings(max_examples=400, deadline=None, derandomize=True)
@given(st.text(alphabet="0123456789.eE+-*/() tpisqrncoa_\u00e9'\"\n", max_size=60))
def test_any_text_gives_a_finite_number_or_a_refusal(text: str) -> None:
    try:
        value = evaluate(text, NAMES)
    except ExpressionError:
        return
    assert math.isfinite(value)
