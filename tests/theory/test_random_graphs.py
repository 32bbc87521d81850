"""500 random wall graphs: resultants, balance, compatibility and shear centre found anew from the flows.

Nothing internal is used here: places by finite differences of `place`, thickness from the walls themselves,
integrals by Gauss points on every stretch between booms.
"""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import random_section

from beam_theory import Flow, Section, Solution, Wall, solve

Z, W = np.polynomial.legendre.leggauss(20)


def stretches(section: Section, wall: Wall) -> list[tuple[float, float]]:
    """Stretches of a wall between its booms, split again so that mild quadrature suffices for tapers."""
    inside = {float(b.at) for b in section.booms if b.wall == wall.name and b.at is not None}
    edges = sorted({0.0, 1.0, *inside, *np.linspace(0, 1, 9).tolist()})
    return list(pairwise(edges))


class Integrator:
    """Places, lengths and weights of a section at many points, found without the solver's internals."""

    def __init__(self, section: Section, solution: Solution) -> None:
        self.section, self.rows = section, {}
        for wall in section.walls:
            u, w = [], []
            for low, high in stretches(section, wall):
                u.append(0.5 * (high + low) + 0.5 * (high - low) * Z)
                w.append(0.5 * (high - low) * W)
            at, weight = np.concatenate(u), np.concatenate(w)
            xy = solution.place(wall.name, at)
            start, end, through = (
                complex(*section.points[wall.start]),
                complex(*section.points[wall.end]),
                wall.arc_through,
            )
            z = xy[:, 0] + 1j * xy[:, 1]
            if through is None:
                rate = np.full(len(at), end - start)
            else:
                # Circle through three points, by perpendicular bisectors.
                a, b, c = start, complex(*through), end
                matrix = np.array([[(b - a).real, (b - a).imag], [(c - a).real, (c - a).imag]])
                rhs = 0.5 * np.array([abs(b - a) ** 2, abs(c - a) ** 2])
                centre = a + complex(*np.linalg.solve(matrix, rhs))
                swept = np.angle((b - centre) / (a - centre)) + np.angle((c - centre) / (b - centre))
                rate = 1j * swept * (z - centre)
            t = wall.thickness[0] + (wall.thickness[1] - wall.thickness[0]) * at
            self.rows[wall.name] = (at, weight, z, rate, t)

    def flow_force(self, flow: Flow) -> tuple[complex, float]:
        force, torque = 0j, 0.0
        for wall in self.section.walls:
            at, weight, z, rate, _ = self.rows[wall.name]
            q = flow.at(wall.name, at)
            force += (weight * q * rate).sum()
            torque += float((weight * q * (np.conj(z) * rate).imag).sum())
        return force, torque

    def gap(self, flow: Flow, loop: tuple[tuple[str, int], ...]) -> tuple[float, float]:
        total = scale = 0.0
        walls = {wall.name: wall for wall in self.section.walls}
        for name, sign in loop:
            at, weight, _, rate, t = self.rows[name]
            part = weight * flow.at(name, at) * np.abs(rate) / (walls[name].g * t)
            total += sign * float(part.sum())
            scale += float(np.abs(part).sum())
        return total, scale

    def area(self, loop: tuple[tuple[str, int], ...]) -> float:
        twice = 0.0
        for name, sign in loop:
            _, weight, z, rate, _ = self.rows[name]
            origin = self.rows[loop[0][0]][2][0]
            twice += sign * float((weight * (np.conj(z - origin) * rate).imag).sum())
        return 0.5 * twice


def node_imbalance(section: Section, solution: Solution, flow: Flow) -> float:
    """Largest of: sum of flows leaving each point plus e A f of its booms, over the largest flow."""
    left = dict.fromkeys(section.points, 0.0)
    k = flow.slope
    for wall in section.walls:
        ends = flow.at(wall.name, np.array([0.0, 1.0]))
        left[wall.start] += ends[0]
        left[wall.end] -= ends[1]
    for boom in section.booms:
        if boom.point is not None:
            at = complex(*section.points[boom.point]) - flow.centroid
            left[boom.point] += boom.e * boom.area * (np.conj(k) * at).real
    return max(abs(value) for value in left.values()) / abs(flow.peak().flow)


@pytest.mark.parametrize("block", range(25))
def test_random_graphs(block: int) -> None:
    for seed in range(20 * block, 20 * block + 20):
        section = random_section(seed)
        solution = solve(section)
        assert all(check.passed for check in solution.checks), (seed, solution.checks)
        xy = np.array(list(section.points.values()))
        size = float(np.ptp(xy, axis=0).max())
        apart = next(c for c in solution.checks if c.name.startswith("shear centre"))
        assert apart.value < 1e-10, (seed, apart)
        tool = Integrator(section, solution)
        pole = complex(solution.require("shear_centre_x"), solution.require("shear_centre_y"))
        for name, want in (("Vx", 1 + 0j), ("Vy", 1j)):
            flow = solution.unit_flow(name)
            force, torque = tool.flow_force(flow)
            assert abs(force - want) < 1e-10, (seed, name, force)
            assert abs(torque - (np.conj(pole) * want).imag) < 1e-10 * size, (seed, name)
            assert node_imbalance(section, solution, flow) < 1e-10, (seed, name)
            for loop in solution.cells:
                gap, scale = tool.gap(flow, loop)
                assert abs(gap) <= 1e-10 * scale, (seed, name, gap / scale)
        flow = solution.unit_flow("T")
        force, torque = tool.flow_force(flow)
        assert abs(force) * size < 1e-10
        open_part = sum(
            w.g
            * float((tool.rows[w.name][1] * np.abs(tool.rows[w.name][3]) * tool.rows[w.name][4] ** 3).sum())
            / 3
            for w in section.walls
            if not solution.in_cell(w.name)
        )
        assert abs(torque + open_part / solution.require("torsion_constant") - 1.0) < 1e-10, seed
        for loop in solution.cells:
            gap, scale = tool.gap(flow, loop)
            assert abs(gap - 2 * flow.twist * tool.area(loop)) <= 1e-10 * scale, seed


def test_derivative_of_flow_and_warping() -> None:
    """dq/ds = -e t f and d(omega)/ds = q_T/(g t) - p, by central differences inside the walls."""
    for seed in (0, 4, 7, 11, 23):
        section = random_section(seed)
        solution = solve(section)
        tool = Integrator(section, solution)
        flow, twist = solution.unit_flow("Vy"), solution.unit_flow("T")
        pole = complex(solution.require("shear_centre_x"), solution.require("shear_centre_y"))
        j = solution.require("torsion_constant")
        for wall in section.walls:
            at, _, z, rate, t = tool.rows[wall.name]
            keep = slice(3, None, 17)
            at, z, rate, t = at[keep], z[keep], rate[keep], t[keep]
            h = 1e-5
            slope = (flow.at(wall.name, at + h) - flow.at(wall.name, at - h)) / (2 * h * np.abs(rate))
            f = (np.conj(flow.slope) * (z - flow.centroid)).real
            want = -wall.e * wall.direct_share * t * f
            scale = float(np.abs(want).max()) + abs(flow.peak().flow) / float(np.abs(rate).max())
            assert_allclose(slope, want, rtol=0, atol=2e-6 * scale)
            slope = (solution.warping_at(wall.name, at + h) - solution.warping_at(wall.name, at - h)) / (
                2 * h
            )
            q = twist.at(wall.name, at) * j
            want = q * np.abs(rate) / (wall.g * t) - (np.conj(z - pole) * rate).imag
            scale = float(np.abs(want).max()) + float(np.ptp(z.real) + np.ptp(z.imag)) ** 2
            assert_allclose(slope, want, rtol=0, atol=2e-6 * scale)
