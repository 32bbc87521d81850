"""Stiffnesses for beam models and indicators; tables as CSV."""

from __future__ import annotations

import csv
import io
import math

import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.comparing import join
from crosscheck.reports.result_table import csv_text
from crosscheck.reports.tables import TABLES, stiffness_table

from .stand_in import FE_OVER_THEORY, both_sides, channel_of_steel


@pytest.fixture
def steel():
    section = channel_of_steel()
    return join(section, *both_sides(section))


def rows(result):
    return {row.name: row for row in (*result.stiffness, *result.indicators)}


def test_stiffnesses_are_moduli_times_properties(steel):
    found = rows(steel)
    assert_allclose(found["EA"].theory["midline"], 210000 * 1000, rtol=1e-12, atol=0)
    assert found["EA"].unit == "N"
    j = 200 * 125 / 3
    assert_allclose(found["GJ"].theory["midline"], 80000 * j, rtol=1e-12, atol=0)
    assert_allclose(found["GJ"].fe.value, 80000 * j * FE_OVER_THEORY["torsion_constant"], rtol=1e-12, atol=0)
    assert found["GJ"].unit == "N mm^2"
    assert found["EIw"].unit == "N mm^4"
    assert_allclose(found["EIw"].fe.half_width, 210000 * 1e-4 * found["EIw"].fe.value / 210000, rtol=1e-9)


def test_offsets_are_from_the_origin_of_the_file(steel):
    found = rows(steel)
    assert_allclose(found["shear_centre_x"].theory["midline"], -18.75, rtol=1e-12, atol=0)
    assert_allclose(found["centroid_x"].fe.value, 12.5, rtol=1e-12, atol=0)


def test_per_unit_modulus_without_a_material(result):
    found = rows(result)
    assert (found["EA"].unit, found["GJ"].unit, found["EIw"].unit) == ("mm^2", "mm^4", "mm^6")
    assert (found["GA_Vy"].unit, found["coupling"].unit) == ("mm^2", "1/mm^2")
    assert_allclose(found["EA"].theory["midline"], 1000.0, rtol=1e-12, atol=0)
    assert "per unit modulus" in stiffness_table(result).title


def test_characteristic_length_is_sqrt_of_warping_over_torsion_stiffness(steel, result):
    row = rows(steel)["characteristic_length"]
    quantity = {q.name: q.theory["midline"] for q in steel.quantities if q.load is None}
    want = math.sqrt(210000 * quantity["warping_constant"] / (80000 * quantity["torsion_constant"]))
    assert_allclose(row.theory["midline"], want, rtol=1e-12, atol=0)
    assert_allclose(row.fe.value, want * math.sqrt(0.94 / 1.02), rtol=1e-12, atol=0)
    assert row.fe.low < row.fe.value < row.fe.high
    # Without a material E/G is 2 (1 + 0.3).
    plain = rows(result)["characteristic_length"].theory["midline"]
    assert_allclose(plain, want * math.sqrt(2.6 / (210000 / 80000)), rtol=1e-12, atol=0)


def test_wagner_coefficients_are_theorys_alone(result):
    row = rows(result)["wagner_x"]
    # Symmetric about y = 50: no Wagner effect of a moment about x.
    assert_allclose(row.theory["midline"], 0.0, rtol=0, atol=1e-9)
    assert row.fe.value is None
    assert row.fe.reason
    assert rows(result)["wagner_v"].theory["midline"] != 0.0


@pytest.mark.parametrize("name", list(TABLES))
def test_tables_as_csv_read_back(result, name):
    table = TABLES[name](result)
    read = list(csv.reader(io.StringIO(csv_text(table))))
    assert tuple(read[0]) == table.columns
    assert len(read) == len(table.rows) + 1
    assert {len(row) for row in read} == {len(table.columns)}
    for row, cells in zip(table.rows, read[1:], strict=True):
        for cell, text in zip(row, cells, strict=True):
            if isinstance(cell, float):
                assert float(text) == cell


def test_a_name_cannot_become_a_formula_of_a_spreadsheet(result):
    from dataclasses import replace

    first = replace(result.wall_envelopes[0], wall="=cmd()")
    changed = replace(result, wall_envelopes=(first,))
    assert ",'=cmd()," in csv_text(TABLES["envelope"](changed))
