"""Materials of a section file, and which of them is the base."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from typing import Any

from crosscheck.faults import FaultList, KeyPath, quoted
from crosscheck.section_file.model import Material
from crosscheck.section_file.numbers import POISSON, POSITIVE, Numbers


def read_materials(
    document: Mapping[str, Any], declared: Collection[str], numbers: Numbers, notes: list[str]
) -> tuple[dict[str, Material], str | None]:
    """Materials by name and the base material.

    Parameters
    ----------
    document : well-formed document
    declared : names of all materials in the file, faulty ones too
    numbers : resolves numbers and takes faults
    notes : receives remarks
    """
    materials: dict[str, Material] = {}
    for name, table in document.get("materials", {}).items():
        path: KeyPath = ("materials", name)
        E = numbers.number((*path, "E"), table.get("E"), POSITIVE)
        nu = numbers.number((*path, "nu"), table.get("nu"), POISSON)
        G = numbers.number((*path, "G"), table.get("G"), POSITIVE)
        if "nu" not in table and "G" not in table:
            numbers.faults.add((*path, "nu"), "nothing", "given, or G instead", "nu = 0.3 suits most metals")
        if E is None:
            continue
        if nu is not None and "G" not in table:
            G = E / (2.0 * (1.0 + nu))
        elif G is not None and "nu" not in table:
            nu = E / (2.0 * G) - 1.0
            if not POISSON.holds(nu):
                words = f"such that nu = E/(2G) - 1 is {POISSON.words}"
                numbers.faults.add((*path, "G"), f"{G:g} (nu = {nu:.4g})", words)
        if G is None or nu is None:
            continue
        if abs(G - E / (2.0 * (1.0 + nu))) > 0.01 * G:
            isotropic = E / (2.0 * (1.0 + nu))
            notes.append(f"materials.{name}: G = {G:g} is taken as given; E/(2(1+nu)) is {isotropic:.5g}")
        materials[name] = Material(name, E, G, nu)
    return materials, _base_material(document, declared, numbers.faults)


def _base_material(document: Mapping[str, Any], declared: Collection[str], faults: FaultList) -> str | None:
    base = document.get("base_material")
    if base is None:
        if len(declared) > 1:
            words = "given when the file has more than one material"
            faults.add(("base_material",), "nothing", words, f"for example {quoted(next(iter(declared)))}")
        return next(iter(declared), None)
    if base not in declared:
        words = "a material of [materials]"
        faults.add(("base_material",), quoted(base), words, near=(base, declared))
    return str(base)
