"""Thresholds and slopes against exact solutions."""

from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import brentq

from crosscheck.batch.running import Hands
from crosscheck.comparison.comparing import compare
from crosscheck.family.members import Family
from crosscheck.family.ranges import ranges_of
from crosscheck.family.threshold import Choice, study
from crosscheck.section_file.reader import read_source

ROWS = Path(__file__).resolve().parents[2] / "cases" / "reference" / "published.json"
HEAD = 'schema = 1\nunits = "mm N"\n[parameters]\nt = 1\n'
BAR = f"""{HEAD}
[points]
a = [0, 0]
b = [10, 0]
[[walls]]
path = ["a", "b"]
thickness = "t"
"""
TUBE = f"""{HEAD}
[points]
a = [10, 0]
b = [-10, 0]
[[walls]]
name = "upper half"
path = ["a", "b"]
arc = {{ through = [0, 10] }}
thickness = "t"
[[walls]]
name = "lower half"
path = ["b", "a"]
arc = {{ through = [0, -10] }}
thickness = "t"
"""
SQUARE = f"""{HEAD}
[points]
a = [0, 0]
b = [10, 0]
c = [10, 10]
d = [0, 10]
[[walls]]
path = ["a", "b", "c", "d", "a"]
thickness = "t"
"""
CHANNEL = f"""{HEAD}
[points]
a = [5, 0]
b = [0, 0]
c = [0, 10]
d = [5, 10]
[[walls]]
path = ["a", "b", "c", "d"]
thickness = "t"
"""
CRITERIA = (0.05, 0.10)


def threshold_of_torsion(tmp_path, text, varied, criterion):
    """The one threshold of J at the midline level, in its interval."""
    path = tmp_path / "section.toml"
    path.write_text(text)
    source = read_source(path)
    family = Family(source, (), ranges_of([varied], source), 1e-5)
    found = study(family, Hands(2), Choice(("torsion_constant",), ("midline",), criterion))
    (threshold,) = found.lines[0].thresholds
    (crossing,) = threshold.crossings
    assert crossing.low < crossing.value < crossing.high
    return crossing


def rectangle(b, t):
    """Torsion constant of a rectangle by its series (Timoshenko & Goodier, Theory of Elasticity, 1970,
    article 109)."""
    odd = np.arange(1, 60, 2)
    series = (np.tanh(odd * math.pi * b / (2 * t)) / odd**5).sum()
    return b * t**3 / 3 * (1 - 192 * t / (math.pi**5 * b) * series)


@pytest.mark.parametrize("criterion", CRITERIA)
def test_solid_rectangle_by_a_third_of_b_t_cubed(tmp_path, criterion):
    exact = brentq(lambda t: 10 * t**3 / 3 / rectangle(10, t) - 1 - criterion, 0.1, 5)
    crossing = threshold_of_torsion(tmp_path, BAR, "t from 0.1 to 5 in 9", criterion)
    assert crossing.value == pytest.approx(exact, rel=5e-4)
    assert crossing.low <= exact <= crossing.high
    assert crossing.outside_above


@pytest.mark.parametrize("criterion", CRITERIA)
def test_round_tube_by_bredt_batho(tmp_path, criterion):
    """J = pi/2 (r_o^4 - r_i^4) = 2 pi R^3 t (1 + t^2/(4 R^2)), Bredt-Batho without the bracket."""
    exact = 2 * 10 * math.sqrt(criterion / (1 - criterion))
    crossing = threshold_of_torsion(tmp_path, TUBE, "t from 0.5 to 12 in 9", criterion)
    assert crossing.value == pytest.approx(exact, rel=5e-4)


def square_tube_rows():
    """Ratio of side to thickness and J over Bredt-Batho's, of the reference rows for square tubes."""
    found = [row for row in json.loads(ROWS.read_text()) if row["title"].startswith("Square tube t/a=")]
    return sorted((float(row["title"].split("=")[1].split(":")[0]), row["value"]) for row in found)


@pytest.mark.long
def test_square_tube_by_bredt_batho_at_the_rows(tmp_path):
    """With a row's own difference as the criterion its thickness is the threshold.

    Half a unit of the last printed digit of the thinnest row is 0.6 % of its difference.
    """
    rows = square_tube_rows()
    assert len(rows) >= 3
    for ratio, value in rows[:: max(len(rows) // 3, 1)]:
        crossing = threshold_of_torsion(tmp_path, SQUARE, "t from 0.1 to 4 in 9", 1 - 1 / value)
        assert crossing.value == pytest.approx(10 * ratio, rel=5e-4 if ratio > 0.05 else 4e-3), ratio


@pytest.mark.long
@pytest.mark.parametrize("criterion", CRITERIA)
def test_square_tube_at_five_and_ten_per_cent(tmp_path, criterion):
    """Rows joined by the polynomial through them and through 1 at no thickness."""
    ratios, values = np.array([(0.0, 1.0), *square_tube_rows()]).T
    smooth = np.polynomial.Polynomial.fit(ratios, values, len(ratios) - 1)
    exact = brentq(lambda ratio: 1 - 1 / smooth(ratio) - criterion, 0.01, 0.3)
    crossing = threshold_of_torsion(tmp_path, SQUARE, "t from 0.1 to 3 in 9", criterion)
    assert crossing.value == pytest.approx(10 * exact, rel=5e-4)


@pytest.mark.parametrize(
    ("text", "quantity", "order", "thicknesses"),
    [
        (CHANNEL, "shear_centre_x", 2, (0.4, 0.2, 0.1)),
        (SQUARE, "torsion_constant", 1, (0.2, 0.1, 0.05)),
        (TUBE, "torsion_constant", 2, (0.8, 0.4, 0.2)),
    ],
)
def test_slope_of_the_difference_as_walls_get_thin(tmp_path, text, quantity, order, thicknesses):
    """Sharp channel's shear centre like (t/h)^2, sharp Bredt-Batho like t/b, round tube like (t/R)^2."""
    path = tmp_path / "section.toml"
    path.write_text(text)
    source = read_source(path)
    family = Family(source, (), ranges_of(["t from 0.01 to 1"], source), 1e-7)
    rows = [compare(family.section([t]), 1e-7).quantity(quantity) for t in thicknesses]
    size = [abs(row.difference["midline"]) for row in rows]
    assert all(row.uncertainty < 0.02 * d for row, d in zip(rows, size, strict=True))
    slopes = np.log2(np.array(size[:-1]) / np.array(size[1:]))
    assert slopes[-1] == pytest.approx(order, abs=0.03 * order)
