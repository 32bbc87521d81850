"""Walls between the same two points: they need names, and must not lie on each other."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from crosscheck.faults import FaultList, KeyPath, quoted
from crosscheck.section_file.model import WallSpec


def same_points_fault(faults: FaultList, path: KeyPath, first: WallSpec, second: WallSpec) -> None:
    """Note two walls between the same points of which one has no name."""
    between = f"{quoted(second.start)} and {quoted(second.end)}"
    found = f"no name at {first.key} or {second.key}, which both join {between}"
    remedy = "two straight walls between the same points also lie on each other: bend one to an arc"
    straight = first.arc_through is None and second.arc_through is None
    faults.add(path, found, "given where two walls join the same points", remedy if straight else "")


def check_same_points(
    walls: Sequence[WallSpec], named: Mapping[str, bool], faults: FaultList, skip_both: bool = False
) -> set[frozenset[str]]:
    """Note walls of one side that join the same points and have no names, or lie on each other.

    Parameters
    ----------
    walls : those that the side sees
    named : for every wall's name whether the file gave it
    faults : receives the faults
    skip_both : leave out pairs that both sides see

    Returns
    -------
    Names of every pair of walls that joins the same points.
    """
    by_points: dict[frozenset[str], WallSpec] = {}
    pairs: set[frozenset[str]] = set()
    for wall in walls:
        points = frozenset((wall.start, wall.end))
        first = by_points.setdefault(points, wall)
        if first is wall:
            continue
        pairs.add(frozenset((first.name, wall.name)))
        if skip_both and first.seen_by == wall.seen_by == "both":
            continue
        if not (named[first.name] and named[wall.name]):
            same_points_fault(faults, entry_path(wall, "name"), first, wall)
        elif first.arc_through is None and wall.arc_through is None:
            found = f"{quoted(wall.name)} on {quoted(first.name)} ({first.key})"
            words = "clear of other walls (these two overlap)"
            faults.add(entry_path(wall, "path"), found, words, "leave one out, or bend one to an arc")
    return pairs


def entry_path(wall: WallSpec, key: str) -> KeyPath:
    """Key path of a key in the entry that defines a wall; of the entry itself where a profile is placed."""
    table, _, index = wall.key.partition("[")
    entry: KeyPath = (table, int(index[:-1]))
    return (*entry, key) if table == "walls" else entry
