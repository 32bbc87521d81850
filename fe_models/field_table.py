"""Mesh and fields of a solution as plain arrays with names that explain themselves."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .band import Array
from .intervals import warping_function
from .mesh import Index
from .picture import cells_of
from .sampling import Samples, stresses
from .solution import Solution

LOADS = ("unit Vx", "unit Vy", "unit T")


@dataclass(frozen=True)
class FieldTable:
    """Linear triangles with fields.

    Parameters
    ----------
    places : (n, 2) array
        In the file's axes [L]; every element has its own.
    triangles : (m, 3) array of int
    points : dict of name to (n,) or (n, 3) array
    cells : dict of name to (m,) array
    wall : (m,) array of int
        Number of the wall that each triangle belongs to.
    walls : tuple of str
        Their names.
    """

    places: Array
    triangles: Index
    points: dict[str, Array]
    cells: dict[str, Array]
    wall: Index
    walls: tuple[str, ...]


def field_table(solution: Solution, length_unit: str = "L") -> FieldTable:
    """All fields at the elements' own nodes, and what belongs to whole elements.

    Notes
    -----
    ``static`` is the stress in equilibrium, ``kinematic`` that of the warping function; the true one lies
    between them where the mesh is smooth. G of the base material is 1.
    """
    fields = solution.fields
    space = fields.space
    e, k = space.nodes.shape
    per = space.element.order**2
    reference = np.broadcast_to(space.element.nodes, (e, k, 2))
    static, kinematic = stresses(fields, Samples(np.arange(e), reference))
    u = length_unit
    points: dict[str, Array] = {
        f"warping function about the shear centre [{u}^2]": warping_function(
            fields, solution.shear_centre
        ).ravel(),
        f"stress function of unit rate of twist, G = 1 [{u}^2]": fields.torsion.function.ravel(),
    }
    for i, load in enumerate(LOADS):
        unit = f"1/{u}^3" if load == "unit T" else f"1/{u}^2"
        for kind, stress in (("static", static[i]), ("kinematic", kinematic[i])):
            flat = stress.reshape(-1, 2)
            name = f"shear stress of {load}, {kind} field [{unit}]"
            points[name] = np.column_stack([flat, np.zeros(len(flat))])
    if solution.poisson is not None:
        at = Samples(np.arange(e), reference)
        for kind, both in zip(("static", "kinematic"), stresses(fields, at, solution.poisson), strict=True):
            for load, stress in zip(LOADS[:2], both[:2], strict=True):
                flat = stress.reshape(-1, 2)
                name = f"shear stress of {load} with nu = {solution.poisson.nu:g}, {kind} field [1/{u}^2]"
                points[name] = np.column_stack([flat, np.zeros(len(flat))])
    cells: dict[str, Array] = {}
    for load, pair in zip(LOADS, (*fields.flexure, fields.torsion), strict=True):
        gap = fields.gap(pair)
        total = float(gap.sum())
        share = gap / total if total > 0.0 else gap
        cells[f"share of the element in the error gap of {load} [-]"] = np.repeat(share, per)
    mesh = space.mesh
    cells["element number [-]"] = np.repeat(np.arange(e), per)
    cells["wall number [-]"] = np.repeat(mesh.owner, per)
    cells["part number (joints, then strips) [-]"] = np.repeat(mesh.region, per)
    triangles = (np.arange(e)[:, None, None] * k + cells_of(space.element)).reshape(-1, 3)
    places = (space.places + fields.inertia.centroid).reshape(-1, 2)
    names = tuple(solution.outline.moduli)
    return FieldTable(places, triangles, points, cells, np.repeat(mesh.owner, per), names)
