"""Finite-element side of the cross-check: the real outline, two-sided warping solutions, error bars."""

from .apart import rings_apart
from .checks import Check
from .edges import Chained, Edge, circle_edges, closed_lines, fitted_edges
from .errors import FeError, LibraryError, OutlineError, SolveError
from .faces import Actions, FaceStress, Peak
from .fields import Fields
from .intervals import Interval
from .location import PointStress
from .mesh_file import require_mesh_library, rings_of_mesh, write_fields
from .outline import Outline
from .outline import outline as outline_of_walls
from .picture import PictureMesh
from .poisson import PoissonFlexure
from .recovery import FlowSamples
from .section import Boom, Rounding, Section, Wall
from .solid import ClosedLine, Place, Solid, loops_of_solid, outline_of_solid
from .solution import (
    ACCURACY_RANGE,
    DEFAULT_ACCURACY,
    MeshSummary,
    Solution,
    solve,
    solve_solid,
)
from .step_face import rings_of_step
from .trial import Trial, imbalance, strip_trial, trial

__all__ = [
    "ACCURACY_RANGE",
    "DEFAULT_ACCURACY",
    "Actions",
    "Boom",
    "Chained",
    "Check",
    "ClosedLine",
    "Edge",
    "FaceStress",
    "FeError",
    "Fields",
    "FlowSamples",
    "Interval",
    "LibraryError",
    "MeshSummary",
    "Outline",
    "OutlineError",
    "Peak",
    "PictureMesh",
    "Place",
    "PointStress",
    "PoissonFlexure",
    "Rounding",
    "Section",
    "Solid",
    "Solution",
    "SolveError",
    "Trial",
    "Wall",
    "circle_edges",
    "closed_lines",
    "fitted_edges",
    "imbalance",
    "loops_of_solid",
    "outline_of_solid",
    "outline_of_walls",
    "require_mesh_library",
    "rings_apart",
    "rings_of_mesh",
    "rings_of_step",
    "solve",
    "solve_solid",
    "strip_trial",
    "trial",
    "write_fields",
]
