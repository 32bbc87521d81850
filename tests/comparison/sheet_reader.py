"""A checker with a calculator: reads a hand sheet's Markdown and redoes it from its printed numbers alone."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from functools import cached_property

import numpy as np

Z, W = np.polynomial.legendre.leggauss(32)
Z, W = 0.5 * (Z + 1.0), 0.5 * W

Row = dict[str, str]


def tables_of(text: str) -> dict[str, list[list[Row]]]:
    """Tables below each heading, rows as head to cell."""
    found: dict[str, list[list[Row]]] = {}
    section, head, rows = "", None, []
    for line in [*text.split("\n"), ""]:
        if line.startswith("## "):
            section = line[3:].partition(" ")[0]
        if not line.startswith("|"):
            if head is not None:
                found.setdefault(section, []).append(rows)
            head, rows = None, []
            continue
        cells = [cell.strip().replace("&#124;", "|") for cell in line.strip("|").split("|")]
        if head is None:
            head = cells
        elif not set(line) <= set("|-"):
            assert len(cells) == len(head), line
            rows.append(dict(zip(head, cells, strict=True)))
    return found


@dataclass(frozen=True)
class Stretch:
    """One row of the table of walls."""

    row: Row

    def number(self, key: str) -> float:
        return float(self.row[key])

    @property
    def k(self) -> float:
        return self.number("e") * self.number("share")

    @cached_property
    def points(self) -> np.ndarray:
        """Midline at the quadrature places, complex."""
        return self.at(Z)[0]

    def at(self, v: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Place and tangent, complex, at fractions."""
        a = complex(self.number("x1"), self.number("y1"))
        b = complex(self.number("x2"), self.number("y2"))
        sweep, radius = self.number("sweep"), self.number("radius")
        if sweep == 0.0:
            return a + (b - a) * v, np.full(len(v), (b - a) / abs(b - a))
        towards = (b - a) / abs(b - a) * np.exp(-0.5j * sweep)
        centre = a + 1j * math.copysign(radius, sweep) * towards
        return centre + (a - centre) * np.exp(1j * sweep * v), towards * np.exp(1j * sweep * v)

    @cached_property
    def t(self) -> np.ndarray:
        return self.number("t1") + (self.number("t2") - self.number("t1")) * Z

    @cached_property
    def ds(self) -> np.ndarray:
        return self.number("length") * W

    def first_moment(self, upto: float = 1.0) -> complex:
        """Integral of k t (x + i y) ds up to a fraction."""
        t = self.number("t1") + (self.number("t2") - self.number("t1")) * Z * upto
        return complex((self.ds * upto * self.k * t * self.at(Z * upto)[0]).sum())

    @cached_property
    def flexibility(self) -> float:
        return float((self.ds / (self.number("g") * self.t)).sum())


@dataclass(frozen=True)
class Sheet:
    """A hand sheet, parsed, and what follows from its walls and booms."""

    text: str

    @cached_property
    def tables(self) -> dict[str, list[list[Row]]]:
        return tables_of(self.text)

    @cached_property
    def load(self) -> dict[str, str]:
        return {row["part"]: row["value"] for row in self.tables["1"][0]}

    @cached_property
    def stretches(self) -> list[Stretch]:
        return [Stretch(row) for row in self.tables["2"][0]]

    @cached_property
    def booms(self) -> list[tuple[complex, float]]:
        rows = self.tables["2"][1] if len(self.tables["2"]) > 1 else []
        return [(complex(float(r["x"]), float(r["y"])), float(r["e A_b"])) for r in rows]

    @cached_property
    def properties(self) -> dict[str, float]:
        return {row["property"]: float(row["value"]) for row in self.tables["3"][1]}

    @cached_property
    def size(self) -> float:
        places = np.concatenate([s.points for s in self.stretches])
        return float(abs(complex(np.ptp(places.real), np.ptp(places.imag))))

    def moments(self) -> tuple[float, complex, float, float, float]:
        """A, first moment, Ixx, Iyy, Ixy from walls and booms."""
        parts = [(s.points, s.ds * s.k * s.t) for s in self.stretches]
        parts += [(np.array([z]), np.array([w])) for z, w in self.booms]
        total = [
            (
                w.sum(),
                (w * z).sum(),
                (w * z.imag**2).sum(),
                (w * z.real**2).sum(),
                (w * z.real * z.imag).sum(),
            )
            for z, w in parts
        ]
        area, first, xx, yy, xy = (sum(values) for values in zip(*total, strict=True))
        return float(area), complex(first), float(xx), float(yy), float(xy)

    def slope(self, vx: float, vy: float) -> complex:
        """a + i b of a shear."""
        _, _, xx, yy, xy = self.moments()
        d = xx * yy - xy**2
        return complex((xx * vx - xy * vy) / d, (yy * vy - xy * vx) / d)

    def drop(self, s: Stretch, slope: complex, upto: float = 1.0) -> float:
        """What the flow loses along a stretch."""
        return float((slope.conjugate() * s.first_moment(upto)).real)

    def basic(self, slope: complex) -> np.ndarray:
        """Flow at end 1 of every stretch: balance at every point, zero at every cut."""
        n = len(self.stretches)
        nodes: dict[str, int] = {}
        for s in self.stretches:
            for key in ("from", "to"):
                nodes.setdefault(s.row[key], len(nodes))
        place = {}
        for s in self.stretches:
            place[s.row["from"]], place[s.row["to"]] = (
                s.at(np.array([0.0]))[0][0],
                s.at(np.array([1.0]))[0][0],
            )
        matrix, right = np.zeros((len(nodes), n)), np.zeros(len(nodes))
        for i, s in enumerate(self.stretches):
            # Into its end 2 flows q1 - drop, out of its end 1 flows q1.
            matrix[nodes[s.row["to"]], i] += 1.0
            right[nodes[s.row["to"]]] += self.drop(s, slope)
            matrix[nodes[s.row["from"]], i] -= 1.0
        for z, w in self.booms:
            nearest = min(place, key=lambda name: abs(place[name] - z))
            right[nodes[nearest]] += w * (slope.conjugate() * z).real
        cuts = [row for row in (self.tables["5"][0] if len(self.tables["5"]) > 1 else []) if "by" in row]
        rows, values = [*matrix], [*right]
        for cut in cuts:
            i = next(k for k, s in enumerate(self.stretches) if s.row["no"] == cut["no"])
            within = self.within(self.stretches[i], float(cut["at fraction of the wall"]))
            rows.append(np.eye(n)[i])
            values.append(self.drop(self.stretches[i], slope, within))
        return np.linalg.lstsq(np.array(rows), np.array(values), rcond=None)[0]

    def within(self, s: Stretch, at: float) -> float:
        """Fraction of a stretch at a fraction of its wall."""
        ends = []
        for key, default in (("from", 0.0), ("to", 1.0)):
            match = re.fullmatch(re.escape(s.row["wall"]) + r" at ([0-9.]+)", s.row[key])
            ends.append(float(match[1]) if match else default)
        return (at - ends[0]) / (ends[1] - ends[0])

    @cached_property
    def cells(self) -> list[list[tuple[Stretch, int, int]]]:
        """Stretch, its number and sign, of every cell."""
        if "6" not in self.tables:
            return []
        found = []
        for row in self.tables["6"][0]:
            signs = {name[1:]: 1 if name[0] == "+" else -1 for name in row["walls"].split(", ")}
            found.append(
                [(s, i, signs[s.row["wall"]]) for i, s in enumerate(self.stretches) if s.row["wall"] in signs]
            )
        return found

    @cached_property
    def areas(self) -> np.ndarray:
        """A_m of every cell from its midlines."""
        return np.array(
            [
                0.5
                * sum(
                    sign * float((s.ds * (np.conj(s.points) * s.at(Z)[1]).imag).sum()) for s, _, sign in cell
                )
                for cell in self.cells
            ]
        )

    @cached_property
    def flexibility(self) -> np.ndarray:
        """F of the closing equations."""
        made = np.zeros((len(self.cells), len(self.cells)))
        for i, one in enumerate(self.cells):
            for j, other in enumerate(self.cells):
                signs = {k: sign for _, k, sign in other}
                made[i, j] = sum(s.flexibility * sign * signs[k] for s, k, sign in one if k in signs)
        return made

    def along(self, starts: np.ndarray, slope: complex, v: np.ndarray) -> np.ndarray:
        """Flow at fractions of every stretch, (stretches, fractions)."""
        return np.array(
            [[q - self.drop(s, slope, at) for at in v] for s, q in zip(self.stretches, starts, strict=True)]
        )

    def closed(self, slope: complex) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Gaps, closing flows, and flows at end 1 without twist."""
        starts = self.basic(slope)
        if not self.cells:
            return np.zeros(0), np.zeros(0), starts
        q = self.along(starts, slope, Z)
        gap = np.array(
            [sum(sign * (W * q[k] / s.t).sum() * s.number("length") / s.number("g") for s, k, sign in cell)
             for cell in self.cells]
        )  # fmt: skip
        c = np.linalg.solve(self.flexibility, -gap)
        return gap, c, starts + self.spread(c)

    def spread(self, c: np.ndarray) -> np.ndarray:
        """Cell flows along the stretches."""
        made = np.zeros(len(self.stretches))
        for flow, cell in zip(c, self.cells, strict=True):
            for _, k, sign in cell:
                made[k] += sign * flow
        return made

    def resultants(self, starts: np.ndarray, slope: complex) -> np.ndarray:
        """Force x, force y and moment about the centroid of every stretch, (stretches, 3)."""
        q = self.along(starts, slope, Z)
        rows = []
        for s, flow in zip(self.stretches, q, strict=True):
            z, tangent = s.at(Z)
            force = (s.ds * flow * tangent).sum()
            rows.append((force.real, force.imag, float((s.ds * flow * (np.conj(z) * tangent).imag).sum())))
        return np.array(rows)
