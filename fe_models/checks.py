"""Self-checks of every solve."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from .fields import Fields
from .intervals import Interval, warping_function
from .outline import Outline
from .quantities import geometry_error


@dataclass(frozen=True)
class Check:
    """One self-check: passed where value <= allowed.

    Attributes
    ----------
    name : what is checked
    value, allowed : what is left over, and how much may be [-]
    passed : the outcome
    """

    name: str
    value: float
    allowed: float
    passed: bool


def check(name: str, value: float, allowed: float) -> Check:
    """A check of a value that must not exceed ``allowed``; not-a-number fails."""
    return Check(name, value, allowed, bool(value <= allowed))


def self_checks(fields: Fields, solid: Outline, found: Mapping[str, Interval]) -> tuple[Check, ...]:
    """Checks of mesh, equilibrium, intervals and redundancy."""
    space = fields.space
    # curved sides are met by interpolated ones, so balances hold to their accuracy
    balance = 1e-5 if solid.curved else 1e-6
    made = [
        check(
            "mesh area and second moments against outline",
            geometry_error(fields, solid),
            1e-5 if solid.curved else 1e-9,
        ),
        check("residual of the kinematic equations", fields.residual, 1e-7),
    ]
    for axis, name in ((0, "Vx"), (1, "Vy")):
        wanted = np.eye(2)[axis]
        for kind in ("kinematic", "static"):
            field = getattr(fields.flexure[axis], kind)
            force = np.array([space.integral(field[..., i]) for i in (0, 1)])
            made.append(
                check(
                    f"resultant of the {kind} field of unit {name}",
                    float(np.abs(force - wanted).max()),
                    balance,
                )
            )
    for kind in ("kinematic", "static"):
        field = getattr(fields.torsion, kind)
        force = np.array([space.integral(field[..., i]) for i in (0, 1)])
        j = fields.twist
        made.append(
            check(
                f"force of the {kind} field of unit twist",
                float(np.abs(force).max() * solid.extent / j),
                1e-6,
            )
        )
    crossed = [
        n for n, q in found.items() if q.low is not None and q.high is not None and not q.low <= q.high
    ]
    made.append(check("intervals with low above high", float(len(crossed)), 0.0))
    made.append(_two_centres(fields, solid, found))
    return tuple(made)


def _two_centres(fields: Fields, solid: Outline, found: Mapping[str, Interval]) -> Check:
    """Shear centre from flow moments against that from warping integrals.

    About the shear centre the warping function is orthogonal to x and y; what is left over is the distance
    between the two centres, which the intervals must cover.
    """
    x_s, y_s = found["shear_centre_x"], found["shear_centre_y"]
    local = warping_function(fields, np.array([x_s.known, y_s.known]))
    space, section = fields.space, fields.inertia
    weighted = fields.moduli.e[:, None] * space.value(local)
    p = space.points
    moments = np.array([space.integral(weighted * p[..., i]) for i in (0, 1)])
    tensor = np.array([[section.yy, section.xy], [section.xy, section.xx]])
    a, b = np.linalg.solve(tensor, moments)
    apart = max(abs(a), abs(b)) / solid.extent
    allowed = (x_s.half_width + y_s.half_width) / solid.extent + (1e-6 if solid.curved else 1e-9)
    return check("shear centre from flow moments against warping integrals", float(apart), float(allowed))
