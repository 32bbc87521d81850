"""beam_theory against the stiffness of the wall network, on all shipped sections and on random graphs."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from network import WallNetwork, modes
from theory_sections import random_section

import beam_theory
from crosscheck import read_section
from crosscheck.comparison.models import theory_section

SHIPPED = sorted((Path(__file__).parents[2] / "cases" / "sections").glob("*.toml"))


def largest_difference(section: beam_theory.Section) -> dict[str, float]:
    """Differences of theory from the network, over the quantity, the size or the peak flow."""
    theory, other = beam_theory.solve(section), WallNetwork(section)
    points = np.array(list(section.points.values()))
    size = float(np.ptp(points, axis=0).max())
    centre = complex(theory.require("shear_centre_x"), theory.require("shear_centre_y"))
    form = other.flexibility()
    off = {
        "torsion_constant": other.torsion_constant / theory.require("torsion_constant") - 1,
        "shear_centre": abs(other.shear_centre - centre)
        / (size + abs(centre - points.mean(axis=0) @ [1, 1j])),
        "shear_area_x": form[0, 0] * theory.require("shear_area_x") - 1,
        "shear_area_y": form[1, 1] * theory.require("shear_area_y") - 1,
        "shear_coupling": (form[0, 1] - theory.require("shear_coupling")) / np.sqrt(form[0, 0] * form[1, 1]),
        "warping_constant": (other.warping_constant() - theory.require("warping_constant"))
        / (theory.require("warping_constant") + 1e-4 * theory.require("torsion_constant") * size**2),
    }
    u = modes()[0]
    flows = [theory.unit_flow(n) for n in ("Vx", "Vy", "T")]
    peak = np.array([abs(f.peak().flow) for f in flows])
    worst = np.zeros(3)
    for piece in other.pieces:
        at = piece.span[0] + (piece.span[1] - piece.span[0]) * u
        got = np.array([f.at(piece.wall, at) for f in flows])
        want = other.flows(piece) / np.array([[1.0], [1.0], [other.torsion_constant]])
        worst = np.maximum(worst, np.abs(got - want).max(axis=1))
    # in an open section a torque makes no net flow on either side: measured on what its faces carry
    peak[2] = max(peak[2], *(p.g * p.t.max() ** 2 / other.torsion_constant for p in other.pieces))
    off |= {f"flow of unit {n}": w / p for n, w, p in zip(("Vx", "Vy", "T"), worst, peak, strict=True)}
    return {n: float(abs(v)) for n, v in off.items()}


def test_shipped_sections() -> None:
    """All files in which theory has a shear centre; those without have no walls or one straight wall."""
    compared, left = {}, []
    for path in SHIPPED:
        read = read_section(path)
        walls = [w for w in read.walls if w.seen_by != "fe"]
        if len(walls) < 2:
            left.append(len(walls))
            continue
        compared[path.stem] = max(largest_difference(theory_section(read)).values())
    assert {n: v for n, v in compared.items() if not v < 1e-8} == {}
    assert len(compared) >= 24
    assert len(left) <= 4


@pytest.mark.parametrize("block", range(8))
def test_random_graphs(block: int) -> None:
    """Arcs, tapers, moduli, shares and booms; no case left out."""
    for seed in range(10 * block, 10 * block + 10):
        off = largest_difference(random_section(seed))
        assert max(off.values()) < 1e-7, (seed, off)


def test_it_would_show() -> None:
    """A shear modulus changed by one per cent on one side only."""
    section = random_section(3)
    theory = beam_theory.solve(section)
    walls = tuple(
        beam_theory.Wall(w.name, w.start, w.end, w.thickness, w.arc_through, w.e, w.g * 1.01, w.direct_share)
        if i == 0
        else w
        for i, w in enumerate(section.walls)
    )
    other = WallNetwork(beam_theory.Section(section.points, walls, section.booms))
    assert abs(other.torsion_constant / theory.require("torsion_constant") - 1) > 1e-6
