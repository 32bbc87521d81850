"""Walls that lie in no cell: the bridges of the wall graph."""

from __future__ import annotations

from .section import Section


def open_walls(section: Section) -> frozenset[str]:
    """Names of the walls whose removal cuts the section in two (Tarjan 1974, without recursion)."""
    leaving: dict[str, list[tuple[str, int]]] = {}
    for i, w in enumerate(section.walls):
        leaving.setdefault(w.start, []).append((w.end, i))
        leaving.setdefault(w.end, []).append((w.start, i))
    found: set[str] = set()
    number: dict[str, int] = {}
    low: dict[str, int] = {}
    for root in leaving:
        if root in number:
            continue
        number[root] = low[root] = len(number)
        stack = [(root, -1, iter(leaving[root]))]
        while stack:
            here, via, rest = stack[-1]
            for far, wall in rest:
                if wall == via:
                    continue
                if far in number:
                    low[here] = min(low[here], number[far])
                else:
                    number[far] = low[far] = len(number)
                    stack.append((far, wall, iter(leaving[far])))
                    break
            else:
                stack.pop()
                if stack:
                    above = stack[-1][0]
                    low[above] = min(low[above], low[here])
                    if low[here] > number[above]:
                        found.add(section.walls[via].name)
    return frozenset(found)
