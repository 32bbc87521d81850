"""The errors of the finite-element side.

FeError
|-- OutlineError   the walls do not make a solid that can be analysed (bad input)
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
}


class OutlineError(FeError):
    """The walls do not bound a solid that the model can stand for.

    Parameters
    ----------
    kind : str
        A key of ``ALLOWED``.
    walls : tuple of str
        Names of the walls concerned.
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


class SolveError(FeError):
    """The mesh generator or the solver failed; the message says where."""
