"""The errors of the finite-element side.

FeError
|-- OutlineError   the walls do not make a solid that can be analysed (bad input)
`-- SolveError     the mesh or the equations could not be made or solved
"""

from __future__ import annotations


class FeError(Exception):
    """Base of every error raised by this package."""


class OutlineError(FeError):
    """The walls do not bound a solid that the model can stand for.

    Parameters
    ----------
    kind : str
        Short name of the fault: ``overlap``, ``swallowed``, ``lost cell``, ``limit`` ...
    walls : tuple of str
        Names of the walls concerned.
    message : str
        What was found and what is allowed.
    """

    def __init__(self, kind: str, walls: tuple[str, ...], message: str) -> None:
        super().__init__(message)
        self.kind = kind
        self.walls = walls
        self.message = message


class SolveError(FeError):
    """The mesh generator or the solver failed; the message says where."""
