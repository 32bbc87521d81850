"""The form of an envelope file: what a document must have to be read as one."""

from __future__ import annotations

from typing import Any

from pydantic import BaseModel, Field, ValidationError


class Shape(BaseModel):
    """Digest of the shape, and parameters that were set anew."""

    shape_sha256: str
    set: list[str]


class Span(BaseModel):
    """From one value to another."""

    low: float = Field(alias="from")
    high: float = Field(alias="to")


class Varied(Span):
    """A parameter and its range."""

    name: str


class Crossing(BaseModel):
    """A threshold and the interval that it lies in."""

    value: float
    low: float
    high: float


class Row(BaseModel):
    """One quantity at one level."""

    name: str
    load: str | None
    level: str
    criterion: float
    known: tuple[float, float] | None
    holds: list[Span]
    fails: list[Span]
    thresholds: list[Crossing]


class Gap(BaseModel):
    """A value at which no section was solved."""

    value: float


class Line(BaseModel):
    """All quantities at one value of the second parameter."""

    second: float | None
    gaps: list[Gap]
    quantities: list[Row]


class Envelope(BaseModel):
    """The whole document; what nobody reads may be there besides."""

    shape: Shape
    parameters: list[Varied] = Field(min_length=1, max_length=2)
    edge: float
    lines: list[Line] = Field(min_length=1)


def form_fault(document: Any) -> str | None:
    """Where a document is no envelope, in words; None where it is one."""
    try:
        Envelope.model_validate(document, strict=False)
    except ValidationError as error:
        (first, *_) = error.errors(include_url=False, include_input=False)
        return f"{'.'.join(map(str, first['loc']))}: {first['msg']}"
    return None
