"""fe_models against torsion and flexure through scikit-fem, on other meshes and by other weak forms."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
import pytest
from fe_sections import box, channel, polyline, two_cell
from general_fe import Answer, answer, rectilinear
from numpy.testing import assert_allclose
from plain_fe import graded

import fe_models

T = 4.0


def lines(*stops: tuple[float, bool], thickness: float = T) -> np.ndarray:
    """Grid lines through stops in order; True: steps shrink towards the stop, as re-entrant corners ask."""
    out = [np.array([stops[0][0]])]
    for (a, fine_a), (b, fine_b) in pairwise(stops):
        first, last = (2e-3 * thickness if fine else 0.5 * thickness for fine in (fine_a, fine_b))
        out.append(a + (b - a) * graded(b - a, first, last, 2.2)[1:])
    return np.concatenate(out)


@dataclass(frozen=True)
class Case:
    """A section for fe_models and the same solid as cells of a grid; moduli by place where they differ."""

    section: fe_models.Section
    xs: np.ndarray
    ys: np.ndarray
    inside: Callable[[np.ndarray, np.ndarray], np.ndarray]
    moduli: Callable[[np.ndarray, np.ndarray], tuple[np.ndarray, np.ndarray]] | None = None


def near(v: np.ndarray, *middles: float) -> np.ndarray:
    return np.any([np.abs(v - m) < 0.5 * T for m in middles], axis=0)


def channel_case() -> Case:
    h = 0.5 * T
    ys = lines((-h, False), (h, True), (60 - h, True), (60 + h, False))
    inside = lambda x, y: (x < h) | near(y, 0, 60)  # noqa: E731
    return Case(channel(40.0, 60.0, T), lines((-h, False), (h, True), (40.0, False)), ys, inside)


def zed_case() -> Case:
    """Both flanges of different length: no axis of symmetry."""
    h = 0.5 * T
    section = polyline([(-30.0, 60.0), (0.0, 60.0), (0.0, 0.0), (45.0, 0.0)], T)
    xs = lines((-30.0, False), (-h, True), (h, True), (45.0, False))
    ys = lines((-h, False), (h, True), (60 - h, True), (60 + h, False))

    def inside(x: np.ndarray, y: np.ndarray) -> np.ndarray:
        return near(x, 0) | (near(y, 60) & (x < h)) | (near(y, 0) & (x > -h))

    return Case(section, xs, ys, inside)


def box_case() -> Case:
    h = 0.5 * T
    xs = lines((-h, False), (h, True), (50 - h, True), (50 + h, False))
    ys = lines((-h, False), (h, True), (30 - h, True), (30 + h, False))
    return Case(box(50.0, 30.0, T), xs, ys, lambda x, y: near(x, 0, 50) | near(y, 0, 30))


def two_cell_case() -> Case:
    h = 0.5 * T
    xs = lines((-h, False), (h, True), (40 - h, True), (40 + h, True), (65 - h, True), (65 + h, False))
    ys = lines((-h, False), (h, True), (35 - h, True), (35 + h, False))
    section = two_cell(40.0, 25.0, 35.0, T)
    return Case(section, xs, ys, lambda x, y: near(x, 0, 40, 65) | near(y, 0, 35))


def two_material_case() -> Case:
    """A zed whose lower flange goes on in another material, butted at x = 25."""
    plain = zed_case()
    points = dict(plain.section.points) | {"k": (25.0, 0.0)}
    *others, last = plain.section.walls
    walls = (*others, replace(last, end="k"), replace(last, name="tip", start="k", e=2.5, g=3.0))
    h = 0.5 * T
    xs = lines((-30.0, False), (-h, True), (h, True), (25.0, True), (45.0, False))

    def moduli(x: np.ndarray, y: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        return np.where(x > 25.0, 2.5, 1.0), np.where(x > 25.0, 3.0, 1.0)

    return Case(replace(plain.section, points=points, walls=walls), xs, plain.ys, plain.inside, moduli)


CASES = {
    "channel": channel_case,
    "zed": zed_case,
    "box": box_case,
    "two cells": two_cell_case,
    "two materials": two_material_case,
}


def by_library(case: Case) -> Answer:
    vertices, triangles = rectilinear(case.xs, case.ys, case.inside)
    if case.moduli is None:
        return answer(vertices, triangles)
    return answer(vertices, triangles, *case.moduli(*vertices[triangles].mean(axis=1).T))


@pytest.mark.parametrize("name", CASES)
def test_torsion_and_flexure(name: str) -> None:
    """Two-sided J of both overlap; A_V from above lies above FE's interval; the shear centres agree."""
    case = CASES[name]()
    other, q = by_library(case), fe_models.solve(case.section, 1e-6).quantities
    assert_allclose(other.area, q["area"].value, rtol=1e-12)
    assert_allclose(other.centroid, [q["centroid_x"].value, q["centroid_y"].value], rtol=0, atol=1e-9)
    j = q["torsion_constant"]
    assert other.below <= other.above <= other.below * (1 + 1e-4)
    assert other.below <= j.high
    assert j.low <= other.above
    centre = [q["shear_centre_x"].value, q["shear_centre_y"].value]
    assert_allclose(other.shear_centre, centre, rtol=0, atol=1e-4 * 60)
    for most, axis in zip(other.shear_area, "xy", strict=True):
        area = q[f"shear_area_{axis}"]
        assert area.low <= most * (1 + 1e-9)
        assert_allclose(area.value, most, rtol=5e-5)


def test_the_library_itself() -> None:
    """Square of side 2: J = 2.2492 (the series), A_V = 5/6 A exactly, everything about the middle."""
    lines_of = np.linspace(3.0, 5.0, 9)
    got = answer(*rectilinear(lines_of, lines_of, lambda x, y: x > 0))
    n = np.arange(1.0, 200.0, 2.0)
    exact = 16 * (1 / 3 - 64 / np.pi**5 * float(np.sum(np.tanh(n * np.pi / 2) / n**5)))
    assert got.below < exact < got.above < got.below * (1 + 2e-5)
    assert_allclose(got.shear_area, 5 / 6 * 4.0, rtol=1e-10)
    assert_allclose(got.shear_centre, [4.0, 4.0], atol=1e-9)
