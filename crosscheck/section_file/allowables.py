"""[allowables]: strengths that margins are taken against, of every wall or of one."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from crosscheck.faults import KeyPath, quoted
from crosscheck.section_file.graph import WallGraph
from crosscheck.section_file.model import AllowableSpec
from crosscheck.section_file.numbers import POSITIVE, Numbers

KINDS = ("shear_stress", "shear_flow", "direct_stress", "von_mises_stress")


def read_allowables(
    document: Mapping[str, Any], numbers: Numbers, graph: WallGraph | None
) -> tuple[AllowableSpec, ...]:
    """Allowables of every wall, then wall by wall; a path's name stands for all its walls.

    Parameters
    ----------
    document : well-formed document
    numbers : resolves numbers and takes faults
    graph : the walls; None when walls are faulty, so that no name can be judged
    """
    table = document.get("allowables", {})
    path: KeyPath = ("allowables",)
    made = _of_table(path, table, None, numbers)
    own: dict[tuple[str | None, str], AllowableSpec] = {}
    for name, entry in table.get("walls", {}).items():
        here: KeyPath = (*path, "walls", name)
        walls = [name] if graph is None else graph.walls_of(name)
        if not walls and graph is not None:
            names = (*graph.named, *graph.paths)
            numbers.faults.add(here, quoted(name), "the name of a wall or path", near=(name, names))
        read = _of_table(here, entry, name, numbers)
        for wall in walls:
            for each in read:
                # What is said of one wall goes before what is said of its whole path.
                if (wall, each.kind) not in own or wall == name:
                    own[wall, each.kind] = AllowableSpec(wall, each.kind, each.value, each.source)
    return (*made, *own.values())


def _of_table(
    path: KeyPath, table: Mapping[str, Any], wall: str | None, numbers: Numbers
) -> list[AllowableSpec]:
    """Allowables of one table, of any kind."""
    given = [kind for kind in KINDS if kind in table]
    if (
        not given
        and not table.get("walls")
        and (wall is not None or table)
        and not numbers.faults.any_at(path)
    ):
        numbers.faults.add(path, "none", f"a table with one or more of {', '.join(KINDS)}")
    source = table.get("source", "")
    values = [(kind, numbers.number((*path, kind), table[kind], POSITIVE)) for kind in given]
    return [AllowableSpec(wall, kind, value, source) for kind, value in values if value is not None]
