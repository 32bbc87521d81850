"""Classical theory of thin-walled beam sections: Bredt-Batho, basic and closing flow, warping.

Takes a Section of its own and gives a Solution; knows nothing of files, screens or finite elements.
"""

from __future__ import annotations

from beam_theory.envelope import Envelope, PlaceEnvelope, WallEnvelope, envelope
from beam_theory.errors import LoadError, SectionError, TheoryError, UndefinedQuantity
from beam_theory.flow import Flow, FlowPeak, FlowPolynomial
from beam_theory.joints import Joint
from beam_theory.levels import LEVELS, solve
from beam_theory.lumped import LumpedSolution
from beam_theory.lumps import Lump
from beam_theory.quantity import Check, Quantity
from beam_theory.section import Boom, Corner, Cut, Load, Section, Wall
from beam_theory.solution import Solution
from beam_theory.stiffness import Stiffness, stiffness
from beam_theory.stress import BoomStress, Stress, StressPeak, stress
from beam_theory.wall_flow import WallFlow
from beam_theory.working import Working, working

__all__ = [
    "LEVELS",
    "Boom",
    "BoomStress",
    "Check",
    "Corner",
    "Cut",
    "Envelope",
    "Flow",
    "FlowPeak",
    "FlowPolynomial",
    "Joint",
    "Load",
    "LoadError",
    "Lump",
    "LumpedSolution",
    "PlaceEnvelope",
    "Quantity",
    "Section",
    "SectionError",
    "Solution",
    "Stiffness",
    "Stress",
    "StressPeak",
    "TheoryError",
    "UndefinedQuantity",
    "Wall",
    "WallEnvelope",
    "WallFlow",
    "Working",
    "envelope",
    "solve",
    "stiffness",
    "stress",
    "working",
]
