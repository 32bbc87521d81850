"""The chapter of inputs: files verbatim with their hashes, units, materials, loads, the section figure."""

from __future__ import annotations

import hashlib
from collections.abc import Callable

from crosscheck.comparison.quantities import unit_text
from crosscheck.dossier.content import (
    Block,
    Chapter,
    Column,
    Fields,
    Figure,
    Heading,
    Paragraph,
    Table,
    Verbatim,
)
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.dossier.texts import plain_unit
from crosscheck.reports.wording import number_text
from crosscheck.section_file.model import LoadSpec, SectionFile

# Longer files are given by their hash and stand in the package.
MOST_LINES = 400


def inputs_chapter(evidence: SectionEvidence, figure: Callable[[str], Figure]) -> Chapter:
    """Everything that went in."""
    section = evidence.section
    units = f"{section.length_unit}, {section.force_unit}; nothing is converted"
    hashes = tuple(
        (f"SHA-256 of {name}", hashlib.sha256(data).hexdigest()) for name, data in evidence.files.items()
    )
    overrides = ", ".join(f"{name} = {text}" for name, text in section.overrides.items())
    fields = [("Title", section.title), ("Units", units), ("Level judged", section.judged)]
    fields.append(("Parameters replaced for this run", overrides or "none"))
    blocks: list[Block] = [
        figure("section"),
        Fields((*fields, *hashes)),
        *_materials(section),
        *_loads(section),
        Heading("Files as they are"),
    ]
    blocks += [_file(name, data) for name, data in evidence.files.items()]
    return Chapter("inputs", "Inputs", tuple(blocks))


def _file(name: str, data: bytes) -> Block:
    """A file line by line, or where it stands when it is long or no text."""
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        return Paragraph(f"{name} is no text; it stands in the folder inputs of the package.")
    lines = text.replace("\r\n", "\n").rstrip("\n").split("\n")
    if len(lines) > MOST_LINES:
        shown = "\n".join(lines[:MOST_LINES])
        return Verbatim(
            shown, f"{name}, the first {MOST_LINES} of {len(lines)} lines; the rest is in the package"
        )
    return Verbatim("\n".join(lines), name)


def _materials(section: SectionFile) -> tuple[Block, ...]:
    if not section.materials:
        return (
            Paragraph("The file names no material: results are per unit modulus, nu = 0.3 where it enters."),
        )
    unit = plain_unit(unit_text(-2, 1, section.length_unit, section.force_unit))
    columns = (
        Column("material", "text"),
        Column(f"E [{unit}]", "number"),
        Column(f"G [{unit}]", "number"),
        Column("nu [-]", "number"),
        Column("source", "text", 1.5),
    )
    source = "section file; it names no other source"
    rows = tuple(
        (m.name, number_text(m.E), number_text(m.G), number_text(m.nu, 3), getattr(m, "source", "") or source)
        for m in section.materials.values()
    )
    return (Table("Materials", columns, rows),)


def _loads(section: SectionFile) -> tuple[Block, ...]:
    if not section.loads:
        return (
            Paragraph("The file has no loads: quantities of the section and unit loads alone are compared."),
        )
    force, length = section.force_unit, section.length_unit
    columns = (
        Column("load", "text", 1.4),
        Column(f"Vx [{force}]", "number"),
        Column(f"Vy [{force}]", "number"),
        Column(f"through [{length}]", "word"),
        Column(f"T [{force} {length}]", "number"),
        Column(f"N [{force}]", "number"),
        Column(f"Mx, My [{force} {length}]", "number"),
        Column(f"B [{force} {length}²]", "number"),
        Column("kind", "word"),
    )
    return (Table("Loads", columns, tuple(_load(load) for load in section.loads)),)


def _load(load: LoadSpec) -> tuple[str, ...]:
    if load.through is None:
        place = "-"
    elif isinstance(load.through, str):
        place = load.through
    else:
        place = ", ".join(number_text(v, 4) for v in load.through)
    return (
        load.name,
        *(number_text(v) for v in load.shear),
        place,
        number_text(load.torque),
        number_text(load.axial),
        ", ".join(number_text(v) for v in load.moment),
        number_text(load.bimoment),
        load.kind or "-",
    )
