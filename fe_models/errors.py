"""The errors of the finite-element side.

FeError
|-- OutlineError   walls or rings do not make a solid that can be analysed (bad input)
|-- LibraryError   a library that only this task needs is not installed
`-- SolveError     the mesh or the equations could not be made or solved
"""

from __future__ import annotations


class FeError(Exception):
    """Base of every error raised by this package."""


ALLOWED = {
    "overlap": "clear of other walls' bands except at shared points",
    "swallowed": "a wall that shows outside its neighbours",
    "lost cell": "thin enough to leave every cell open",
    "radius": "a radius that the walls at the point have room for",
    "limit": "a section of at most 2000 walls",
    "direct": "a section with a wall or boom that carries direct stress",
    "points": "of sizes that one mesh can have: at most 40000 points round a joint or an outline",
    "unknowns": "a section that a mesh of at most 500000 unknowns stands for",
    "ring": "closed by at least three lines, or two edges of which one is an arc, at finite places",
    "zero length": "edges between different places",
    "arc": "a third point off both ends of the arc, between them where all three lie on one line",
    "crossing": "clear of itself and of every other ring",
    "gap": "closed: every edge joined to the next within the stated gap",
    "branch": "made of closed lines that share no point: two edges at each",
    "step": "a STEP file of one plane face across x, y or z",
    "mesh": "a mesh file of one flat sheet of triangles",
    "agreement": "in agreement with the walls: area within 0.5 %, centroid within 0.5 % of the overall size",
    "opening": "inside the outer ring and not inside another opening",
}


class OutlineError(FeError):
    """The walls, or the rings of an outline, do not bound a solid that the model can stand for.

    Parameters
    ----------
    kind : str
        A key of ``ALLOWED``.
    walls : tuple of str
        Names of the walls or rings concerned.
    found : str
        What was found; what is allowed follows from the kind.
    """

    def __init__(self, kind: str, walls: tuple[str, ...], found: str) -> None:
        super().__init__(kind, walls, found)
        self.kind = kind
        self.walls = walls
        self.found = found

    @property
    def allowed(self) -> str:
        """Completes the sentence "must be ..."."""
        return ALLOWED[self.kind]

    def __str__(self) -> str:
        return f"must be {self.allowed}, got {self.found}"


class LibraryError(FeError):
    """An optional library is missing; the message says which and how to install it."""


class SolveError(FeError):
    """The mesh generator or the solver failed; the message says where."""
