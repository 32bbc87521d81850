"""What a section file puts on its walls: cuts, probes, booms, corners, stated values, criteria."""

from __future__ import annotations

from collections import Counter
from collections.abc import Collection, Mapping, Sequence
from itertools import chain
from typing import Any

from crosscheck.comparison.quantities import AT_PROBES, OF_A_LOAD, QUANTITIES, UNIT_LOADS
from crosscheck.faults import FaultList, KeyPath, quoted
from crosscheck.section_file.graph import SAME, WallGraph
from crosscheck.section_file.keys import ENTRY_LIMITS
from crosscheck.section_file.model import (
    EVERY_BEND,
    BoomSpec,
    CornerSpec,
    CutSpec,
    Place,
    ProbeSpec,
    StatedSpec,
    WallSpec,
)
from crosscheck.section_file.numbers import NOT_NEGATIVE, POSITIVE, SHARE, Numbers


class AttachmentReader:
    """Reads the tables that refer to points and walls by name.

    Parameters
    ----------
    document : well-formed document
    numbers : resolves numbers and takes faults
    points : places of points that are without fault
    declared_points : all point names of the file, faulty ones too
    graph : the walls; None when walls are faulty, so that no reference can be judged
    base_material, materials : for booms
    """

    def __init__(
        self,
        document: Mapping[str, Any],
        numbers: Numbers,
        points: Mapping[str, Place],
        declared_points: Collection[str],
        graph: WallGraph | None,
        base_material: str | None,
        materials: Collection[str],
    ) -> None:
        self.document = document
        self.numbers = numbers
        self.faults: FaultList = numbers.faults
        self.points = points
        self.declared_points = declared_points
        self.pieces = {} if graph is None else graph.pieces
        self.walls: dict[str, list[WallSpec]] | None = None
        # walls that meet at each point that has any
        self.meeting = Counter(p for w in (graph.walls if graph else ()) for p in (w.start, w.end))
        if graph is not None:
            self.walls = {}
            for wall in graph.walls:
                # One of theory and one of FE may share a name.
                self.walls.setdefault(wall.name, []).append(wall)
            # A wall that placed profiles split goes by its whole name too.
            self.walls |= {whole: self.walls[own[0].name] for whole, own in self.pieces.items()}
        self.base_material = base_material
        self.materials = materials

    def cuts(self) -> tuple[CutSpec, ...]:
        """Cuts in file order, at most one per wall."""
        cuts: dict[str, CutSpec] = {}
        for index, table in enumerate(self.document.get("cuts", [])):
            wall, at = self._place_on_wall(("cuts", index), table, "theory")
            if wall is None:
                continue
            wall, at = self._piece(wall, 0.0 if at is None else at)
            if wall in cuts:
                self.faults.add(("cuts", index, "wall"), f"{quoted(wall)} again", "cut once")
            cuts[wall] = CutSpec(wall, at)
        return tuple(cuts.values())

    def probes(self) -> tuple[ProbeSpec, ...]:
        """Probes in file order."""
        probes: dict[str, ProbeSpec] = {}
        for index, table in enumerate(self.document.get("probes", [])):
            wall, at = self._place_on_wall(("probes", index), table, None)
            pitch = self.numbers.number(("probes", index, "pitch"), table.get("pitch"), POSITIVE)
            label = table.get("label")
            if label in probes:
                self.faults.add(("probes", index, "label"), f"{quoted(label)} again", "unique")
            elif label is not None and wall is not None:
                probes[label] = ProbeSpec(label, *self._piece(wall, 0.0 if at is None else at), pitch)
        return tuple(probes.values())

    def _place_on_wall(
        self, path: KeyPath, table: Mapping[str, Any], side: str | None
    ) -> tuple[str | None, float | None]:
        at = self.numbers.number((*path, "at"), table.get("at"), SHARE)
        return self._wall((*path, "wall"), table.get("wall"), side), at

    def _piece(self, wall: str, at: float) -> tuple[str, float]:
        """A place on a wall as one on its piece, where placed profiles split it."""
        for piece in self.pieces.get(wall, ()):
            if at <= piece.stop:
                return piece.name, (at - piece.begin) / (piece.stop - piece.begin)
        return wall, at

    def _wall(self, path: KeyPath, name: str | None, side: str | None) -> str | None:
        """The name of a wall, judged: it must exist, seen by a side ("both": by each; None: by any)."""
        if name is not None and self.walls is not None and name not in self.walls:
            parts = [f"{name} {number}" for number in (1, 2) if f"{name} {number}" in self.walls]
            remedy = f"the walls of that path are {', '.join(map(quoted, parts))} and so on" if parts else ""
            near = None if parts else (name, self.walls)
            self.faults.add(path, quoted(name), "the name of a wall", remedy, near=near)
        elif name is not None and self.walls is not None:
            sees = {wall.seen_by for wall in self.walls[name]}
            if side is not None and not sees & {side, "both"} and sees != {"theory", "fe"}:
                words = "both sides see" if side == "both" else f"{side} sees"
                self.faults.add(path, f"{quoted(name)}, which only {sees.pop()} sees", f"a wall that {words}")
        return name

    def booms(self) -> tuple[BoomSpec, ...]:
        """Booms in file order, lists and counts taken apart: count = n puts them at k/(n+1), k = 1..n."""
        booms: list[BoomSpec] = []
        for index, table in enumerate(self.document.get("booms", [])):
            if len(booms) > ENTRY_LIMITS["booms"]:
                words = f"at most {ENTRY_LIMITS['booms']} booms"
                self.faults.add(("booms",), f"{len(booms)} booms or more in all", words)
                break
            path: KeyPath = ("booms", index)
            area = self.numbers.number((*path, "area"), table.get("area"), POSITIVE) or 0.0
            material = table.get("material", self.base_material)
            if "material" in table and material not in self.materials:
                words = "a material of [materials]"
                self.faults.add((*path, "material"), quoted(material), words, near=(material, self.materials))
            seen_by = table.get("seen_by", "both")
            at, wall, count = table.get("at"), table.get("wall"), table.get("count")
            if isinstance(at, str) and wall is None and count is None:
                if at not in self.declared_points:
                    near = (at, self.declared_points)
                    self.faults.add((*path, "at"), quoted(at), "a point of [points]", near=near)
                else:
                    self._boom_point((*path, "at"), at, seen_by)
                booms.append(BoomSpec(area, point=at, material=material, seen_by=seen_by))
            elif wall is not None and (at is None) != (count is None):
                self._wall((*path, "wall"), wall, seen_by)
                fractions = self._fractions((*path, "at"), at, count)
                booms += [self._boom_on(wall, each, area, material, seen_by) for each in fractions]
            else:
                keys = ", ".join(key for key in ("at", "wall", "count") if key in table) or "none of these"
                self.faults.add(path, keys, "given by at = a point, by wall and at, or by wall and count")
        return tuple(booms)

    def _boom_on(self, wall: str, at: float, area: float, material: str | None, seen_by: str) -> BoomSpec:
        """A boom on a wall: at the point of a placed profile where it meets one."""
        for piece in self.pieces.get(wall, ()):
            for place, point in ((piece.begin, piece.start), (piece.stop, piece.end)):
                if 0.0 < place < 1.0 and abs(at - place) <= SAME:
                    return BoomSpec(area, point, material=material, seen_by=seen_by)
        return BoomSpec(area, None, *self._piece(wall, at), material, seen_by)

    def _boom_point(self, path: KeyPath, point: str, seen_by: str) -> None:
        """Note a point at which a side that sees the boom has no wall."""
        for side in ("theory", "fe"):
            if self.walls is None or seen_by not in ("both", side):
                continue
            ends = (
                end
                for wall in chain.from_iterable(self.walls.values())
                for end in (wall.start, wall.end)
                if wall.seen_by in ("both", side)
            )
            if point not in ends:
                self.faults.add(
                    path, f"{quoted(point)}, where {side} has no wall", "a point that a wall ends at"
                )
                return

    def _fractions(self, path: KeyPath, at: Any, count: int | None) -> list[float]:
        if count is not None:
            return [number / (count + 1) for number in range(1, count + 1)]
        if isinstance(at, list):
            values = [self.numbers.number((*path, i), each, SHARE) for i, each in enumerate(at)]
        else:
            values = [self.numbers.number(path, at, SHARE)]
        return [value for value in values if value is not None]

    def corners(self) -> tuple[CornerSpec, ...]:
        """Rounded corners in file order."""
        corners = []
        for point, table in self.document.get("corners", {}).items():
            path: KeyPath = ("corners", point)
            if point != EVERY_BEND and point not in self.declared_points:
                near = (point, (*self.declared_points, EVERY_BEND))
                self.faults.add(path, quoted(point), f"a point of [points] or {EVERY_BEND}", near=near)
            elif self.meeting.get(point, 2) < 2 and "outer_radius" not in table:
                words = "a point where walls meet: a free end has no inner side"
                remedy = "leave it out, or give outer_radius to round the free end"
                self.faults.add(path, f"{quoted(point)}, at the end of a single wall", words, remedy)
            inner = self.numbers.number((*path, "inner_radius"), table.get("inner_radius"), NOT_NEGATIVE)
            outer = self.numbers.number((*path, "outer_radius"), table.get("outer_radius"), NOT_NEGATIVE)
            corners.append(CornerSpec(point, inner or 0.0, outer))
        return tuple(corners)

    def stated(self, probes: Sequence[ProbeSpec] = ()) -> tuple[StatedSpec, ...]:
        """Stated values in file order; ``probes``: those that they may belong to."""
        stated = []
        loads = [table["name"] for table in self.document.get("loads", []) if "name" in table]
        for index, table in enumerate(self.document.get("stated", [])):
            path: KeyPath = ("stated", index)
            quantity = table.get("quantity", "")
            if quantity:
                self._quantity((*path, "quantity"), quantity)
            value = self.numbers.number((*path, "value"), table.get("value"))
            tolerance = self.numbers.number((*path, "tolerance"), table.get("tolerance"), NOT_NEGATIVE)
            raw = table.get("measured_from")
            datum: Place | str | None = raw if not isinstance(raw, list) else None
            if isinstance(raw, list):
                datum = self.numbers.pair((*path, "measured_from"), raw)
            elif raw is not None and self.walls is not None:
                known = (*self.declared_points, *self.walls)
                if raw not in known:
                    words = "coordinates [x, y], a point or a wall"
                    self.faults.add((*path, "measured_from"), quoted(raw), words, near=(raw, known))
            load = table.get("load")
            if load is not None and load not in (*UNIT_LOADS, *loads):
                near = (load, (*UNIT_LOADS, *loads))
                self.faults.add(
                    (*path, "load"), quoted(load), "a load of this file or a unit load", near=near
                )
            if load is None and quantity in OF_A_LOAD and len(loads) != 1:
                words = f"given for {quantity}, a quantity of a load"
                self.faults.add((*path, "load"), "no load", words)
            source, level, probe = table.get("source", ""), table.get("level"), table.get("probe")
            if probe is not None:
                self._stated_probe((*path, "probe"), probe, quantity, probes)
            if isinstance(datum, str) and datum in self.pieces:
                datum = self.pieces[datum][0].name
            stated.append(StatedSpec(quantity, value or 0.0, source, tolerance, datum, load, level, probe))
        return tuple(stated)

    def _stated_probe(self, path: KeyPath, label: str, quantity: str, probes: Sequence[ProbeSpec]) -> None:
        """Judge the probe of a stated value: it must exist, and the quantity be a flow at probes."""
        labels = [table["label"] for table in self.document.get("probes", []) if "label" in table]
        labels += [probe.label for probe in probes if probe.label not in labels]
        if quantity in QUANTITIES and quantity != AT_PROBES:
            self.faults.add(path, f"a probe for {quantity}", f"left out, or given for {AT_PROBES}")
        elif label not in labels:
            self.faults.add(path, quoted(label), "the label of a probe of [[probes]]", near=(label, labels))

    def criteria(self, notes: list[str]) -> dict[str, float]:
        """Largest accepted differences by quantity name [-]."""
        criteria: dict[str, float] = {}
        for name, raw in self.document.get("criteria", {}).items():
            path: KeyPath = ("criteria", name)
            self._quantity(path, name)
            value = self.numbers.number(path, raw, POSITIVE)
            if value is None:
                continue
            if value > 1.0:
                notes.append(f"criteria.{name} = {value:g} accepts {100 * value:g} % (5 % is written 0.05)")
            criteria[name] = value
        return criteria

    def _quantity(self, path: KeyPath, name: str) -> None:
        if name not in QUANTITIES:
            self.faults.add(path, quoted(name), "the name of a quantity", near=(name, QUANTITIES))
