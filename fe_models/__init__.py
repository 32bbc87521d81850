"""Finite-element side of the cross-check: the real outline, two-sided warping solutions, error bars."""

from .checks import Check
from .errors import FeError, OutlineError, SolveError
from .faces import Actions, FaceStress, Peak
from .intervals import Interval
from .outline import Outline
from .picture import PictureMesh
from .poisson import PoissonFlexure
from .recovery import FlowSamples
from .section import Boom, Rounding, Section, Wall
from .solution import (
    ACCURACY_RANGE,
    DEFAULT_ACCURACY,
    MeshSummary,
    Solution,
    solve,
)

__all__ = [
    "ACCURACY_RANGE",
    "DEFAULT_ACCURACY",
    "Actions",
    "Boom",
    "Check",
    "FaceStress",
    "FeError",
    "FlowSamples",
    "Interval",
    "MeshSummary",
    "Outline",
    "OutlineError",
    "Peak",
    "PictureMesh",
    "PoissonFlexure",
    "Rounding",
    "Section",
    "Solution",
    "SolveError",
    "Wall",
    "solve",
]
