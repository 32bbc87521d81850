"""Every public name says what it takes and gives, with units."""

from __future__ import annotations

import dataclasses
import inspect
import re
from functools import cached_property

import pytest

import beam_theory
import crosscheck
import fe_models

PUBLIC = [
    pytest.param(getattr(package, name), id=f"{package.__name__}.{name}")
    for package in (beam_theory, fe_models, crosscheck)
    for name in package.__all__
    if inspect.isclass(getattr(package, name)) or inspect.isfunction(getattr(package, name))
]
# Dimensions as the nomenclature writes them: [L^4], [F/L^2], [1/F], [rad], [s], none: [-].
UNIT = re.compile(r"\[(?:-|rad|s|(?:1|[FL](?:\^\d+)?)(?:[ /][FL](?:\^\d+)?)*)\]")
NUMERIC = re.compile(r"\b(?:float|complex|Array|ArrayLike|Floats|NDArray|Place|Position|Quantity|Interval)\b")


def doc_of(thing: object) -> str:
    """Its own docstring, not that of a base class, nor the one that dataclasses write."""
    doc = inspect.cleandoc(getattr(thing, "__doc__", None) or "")
    return "" if inspect.isclass(thing) and doc.startswith(f"{thing.__name__}(") else doc


def own_fields(thing: type) -> list[dataclasses.Field]:
    """Fields that the class itself declares."""
    return [f for f in dataclasses.fields(thing) if f.name in vars(thing).get("__annotations__", {})]


def lacking(thing: object) -> list[str]:
    """What the documentation of a public function or class lacks."""
    doc = doc_of(thing)
    if not doc:
        return ["a docstring"]
    found = []
    if inspect.isfunction(thing):
        signature = inspect.signature(thing)
        names = list(signature.parameters)
        types = [str(p.annotation) for p in signature.parameters.values()] + [
            str(signature.return_annotation)
        ]
        if names and "Parameters\n" not in doc:
            found.append("Parameters")
        if signature.return_annotation not in ("None", None) and "Returns\n" not in doc:
            found.append("Returns")
    elif dataclasses.is_dataclass(thing):
        names = [f.name for f in own_fields(thing)]
        types = [str(f.type) for f in own_fields(thing)]
        if names and "Parameters\n" not in doc and "Attributes" not in doc:
            found.append("Parameters or Attributes")
    else:
        names, types = [], []
    found += [name for name in names if not re.search(rf"\b{name}\b", doc)]
    if any(NUMERIC.search(each) for each in types) and not UNIT.search(doc):
        found.append("a unit")
    if inspect.isclass(thing):
        found += undocumented_members(thing)
    return found


def undocumented_members(thing: type) -> list[str]:
    """Public methods and properties without a docstring."""
    found = []
    for name, member in vars(thing).items():
        if isinstance(member, property):
            member = member.fget
        elif isinstance(member, cached_property):
            member = member.func
        elif isinstance(member, (classmethod, staticmethod)):
            member = member.__func__
        if not name.startswith("_") and inspect.isfunction(member) and not member.__doc__:
            found.append(f"a docstring of {name}")
    return found


@pytest.mark.parametrize("thing", PUBLIC)
def test_public_names_are_documented_with_units(thing):
    assert lacking(thing) == []


def test_what_lacks_is_seen():
    """The check itself can fail."""

    @dataclasses.dataclass
    class Bare:
        """A thing.

        Attributes
        ----------
        width : how wide
        """

        width: float
        height: float

        def area(self) -> float:
            return self.width * self.height

    def long(length: float) -> float:
        """It is long."""
        return length

    assert lacking(Bare) == ["height", "a unit", "a docstring of area"]
    assert lacking(long) == ["Parameters", "Returns", "length", "a unit"]
