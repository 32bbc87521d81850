"""Finite-element side of the cross-check: the real outline, two-sided warping solutions, error bars."""

from .checks import Check
from .errors import FeError, OutlineError, SolveError
from .intervals import Interval
from .outline import Outline
from .recovery import FlowSamples
from .section import Section, Wall
from .solution import (
    ACCURACY_RANGE,
    DEFAULT_ACCURACY,
    MeshSummary,
    PictureMesh,
    Solution,
    solve,
)

__all__ = [
    "ACCURACY_RANGE",
    "DEFAULT_ACCURACY",
    "Check",
    "FeError",
    "FlowSamples",
    "Interval",
    "MeshSummary",
    "Outline",
    "OutlineError",
    "PictureMesh",
    "Section",
    "Solution",
    "SolveError",
    "Wall",
    "solve",
]
