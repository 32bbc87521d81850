"""Pictures of the evidence page as inline SVG: share of tolerance by source, order plots."""

from __future__ import annotations

import html
import math
from collections.abc import Mapping, Sequence

from crosscheck.verification.check import CheckOutcome, Series
from crosscheck.verification.evidence import known
from crosscheck.verification.judging import RowOutcome

# Shares below this are drawn at the left edge.
LEAST = 1e-6
ROW = 18
LABEL = 420
WIDTH = 1130
INK, PALE, BAD = "#1a1a1a", "#c8c8c8", "#b00020"
SIDE_WORDS = {"theory": "theory", "fe": "finite elements", "both": "their difference"}


def share_chart(sources: Mapping[str, Sequence[RowOutcome]]) -> str:
    """Share of its tolerance that each row uses, one line a source, logarithmic; at 1 the tolerance is used
    up."""
    top, bottom = 46, 34
    height = top + ROW * len(sources) + bottom
    left, right = LABEL + 12, WIDTH - 24
    most = 3.0

    def x(share: float) -> float:
        held = min(max(share, LEAST), most)
        return left + (right - left) * math.log10(held / LEAST) / math.log10(most / LEAST)

    parts = [_open(WIDTH, height, "share of tolerance used, by source")]
    heights = [top + ROW * (i + 0.5) for i in range(len(sources))]
    parts += [_line(left, y, right, y, "#ececec", 1) for y in heights]
    for power in range(-6, 1):
        place = x(10.0**power)
        strong = power == 0
        parts.append(
            _line(place, top - 6, place, height - bottom + 4, INK if strong else PALE, 1.6 if strong else 1)
        )
        words = "all of it" if strong else f"{100 * 10.0**power:g} %"
        parts.append(_text(place, height - bottom + 18, words, anchor="middle", small=True))
    parts.append(_text(x(LEAST), height - 2, "or less", anchor="middle", small=True))
    parts.append(_marks_key(left))
    for y, (source, rows) in zip(heights, sources.items(), strict=True):
        parts.append(_text(LABEL, y + 4, f"{_cut(source, 56)}  ({len(rows)})", anchor="end"))
        parts += [_mark(x(_held(row)), y, row) for row in rows if not known(row)]
    return "".join([*parts, "</svg>"])


def _held(row: CheckOutcome) -> float:
    share = row.share
    return share if math.isfinite(share) else 10.0


def _marks_key(left: float) -> str:
    """What the marks mean, above the plot."""
    parts, at = [], left
    for side, words in SIDE_WORDS.items():
        parts += [_shape(at + 6, 20, side, INK), _text(at + 16, 24, words)]
        at += 30 + 7 * len(words)
    parts += [_cross(at + 6, 20), _text(at + 16, 24, "failed")]
    return "".join(parts)


def _mark(x: float, y: float, row: RowOutcome) -> str:
    shape = _shape(x, y, row.side, INK) if row.passed else _cross(x, y)
    return f"<g>{shape}<title>{html.escape(row.name)}: {html.escape(row.detail)}</title></g>"


def _shape(x: float, y: float, side: str, colour: str) -> str:
    if side == "theory":
        return f'<circle cx="{x:.1f}" cy="{y:.1f}" r="3.4" fill="{colour}" fill-opacity="0.55"/>'
    if side == "fe":
        return f'<circle cx="{x:.1f}" cy="{y:.1f}" r="3.6" fill="none" stroke="{colour}" stroke-width="1.2"/>'
    points = f"{x:.1f},{y - 5:.1f} {x + 5:.1f},{y:.1f} {x:.1f},{y + 5:.1f} {x - 5:.1f},{y:.1f}"
    return f'<polygon points="{points}" fill="white" stroke="{colour}" stroke-width="1.2"/>'


def _cross(x: float, y: float) -> str:
    path = f"M{x - 5:.1f} {y - 5:.1f} l10 10 m0 -10 l-10 10"
    return f'<path d="{path}" stroke="{BAD}" stroke-width="2.4" fill="none"/>'


def order_chart(title: str, series: Mapping[str, Series]) -> str:
    """Errors over what is refined, both logarithmic, with the slope found and demanded beside each line."""
    width, height = 470, 300
    left, right, top, bottom = 66, 300, 30, 254
    drawn = {name: s for name, s in series.items() if _pairs(s)}
    if not drawn:
        return ""
    xs = [x for s in drawn.values() for x, _ in _pairs(s)]
    ys = [y for s in drawn.values() for _, y in _pairs(s)]
    x_low, x_high = _ends(xs)
    y_low, y_high = _ends(ys)

    def place(x: float, y: float) -> tuple[float, float]:
        across = (math.log10(x) - x_low) / (x_high - x_low)
        up = (math.log10(y) - y_low) / (y_high - y_low)
        return left + (right - left) * across, bottom - (bottom - top) * up

    first = next(iter(drawn.values()))
    parts = [_open(width, height, title), _text(4, 16, _cut(title, 64), strong=True)]
    parts += [_line(left, bottom, right, bottom, INK, 1), _line(left, top, left, bottom, INK, 1)]
    for value in dict.fromkeys((min(xs), max(xs))):
        px, _ = place(value, ys[0])
        parts += [_line(px, bottom, px, bottom + 4, INK, 1)]
        parts.append(_text(px, bottom + 18, f"{value:.3g}", anchor="middle", small=True))
    powers = _powers(y_low, y_high)
    for power in powers if len(powers) > 1 else ():
        _, py = place(xs[0], 10.0**power)
        parts += [_line(left - 4, py, left, py, INK, 1), _power(left - 7, py + 4, power)]
    for value in dict.fromkeys((min(ys), max(ys))) if len(powers) < 2 else ():
        _, py = place(xs[0], value)
        parts += [_line(left - 4, py, left, py, INK, 1)]
        parts.append(_text(left - 7, py + 4, f"{value:.2g}", anchor="end", small=True))
    parts.append(_text((left + right) / 2, bottom + 38, first.x_label, anchor="middle", small=True))
    middle = (top + bottom) / 2
    parts.append(
        f'<text transform="translate(12 {middle}) rotate(-90)" text-anchor="middle" class="small">'
        f"{html.escape(first.y_label)}</text>"
    )
    lines = []
    for number, (name, one) in enumerate(drawn.items()):
        points = [place(x, y) for x, y in sorted(_pairs(one))]
        path = " ".join(f"{px:.1f},{py:.1f}" for px, py in points)
        dash = ("", "6 3", "2 3", "8 3 2 3")[number % 4]
        parts.append(f'<polyline points="{path}" fill="none" stroke="{INK}" stroke-dasharray="{dash}"/>')
        parts += [f'<circle cx="{px:.1f}" cy="{py:.1f}" r="2.6" fill="{INK}"/>' for px, py in points]
        lines.append((points[-1], _slope_words(name if len(drawn) > 1 else "slope", one)))
    for at, wanted, words in _apart(lines, top, bottom):
        parts.append(_line(at[0], at[1], right + 8, wanted, PALE, 1))
        parts.append(_text(right + 11, wanted + 4, words, small=True))
    return "".join([*parts, "</svg>"])


def _slope_words(name: str, series: Series) -> str:
    words = _cut(name, 18)
    if series.slope is not None:
        words += f": {series.slope:.2f}"
        if series.expected is not None:
            words += f" ({series.expected:.3g})"
    return words


def _apart(
    lines: list[tuple[tuple[float, float], str]], top: float, bottom: float
) -> list[tuple[tuple[float, float], float, str]]:
    """Heights of the labels: near their lines' ends and 14 apart."""
    placed: list[tuple[tuple[float, float], float, str]] = []
    height = top
    for at, words in sorted(lines, key=lambda item: item[0][1]):
        height = max(height + (14 if placed else 0), at[1])
        placed.append((at, height, words))
    over = max(0.0, height - bottom)
    return [(at, wanted - over, words) for at, wanted, words in placed]


def _pairs(series: Series) -> list[tuple[float, float]]:
    return [(x, y) for x, y in zip(series.x, series.y, strict=True) if x > 0.0 and y > 0.0]


def _ends(values: Sequence[float]) -> tuple[float, float]:
    low, high = math.log10(min(values)), math.log10(max(values))
    pad = max(0.06 * (high - low), 0.05)
    return low - pad, high + pad


def _powers(low: float, high: float) -> list[int]:
    """At most six whole powers of ten between two logarithms."""
    found = list(range(math.ceil(low), math.floor(high) + 1))
    step = max(1, math.ceil(len(found) / 6))
    return found[::step]


def _power(x: float, y: float, power: int) -> str:
    return (
        f'<text x="{x:.1f}" y="{y:.1f}" text-anchor="end" class="small">10<tspan dy="-4" font-size="8">'
        f"{power}</tspan></text>"
    )


def _open(width: float, height: float, title: str) -> str:
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {width:g} {height:g}" role="img" '
        f'style="max-width:{width:g}px"><title>{html.escape(title)}</title>'
    )


def _line(x1: float, y1: float, x2: float, y2: float, colour: str, width: float) -> str:
    return (
        f'<line x1="{x1:.1f}" y1="{y1:.1f}" x2="{x2:.1f}" y2="{y2:.1f}" stroke="{colour}" '
        f'stroke-width="{width:g}"/>'
    )


def _text(
    x: float, y: float, text: str, *, anchor: str = "start", small: bool = False, strong: bool = False
) -> str:
    look = ' class="small"' if small else ' class="strong"' if strong else ""
    return f'<text x="{x:.1f}" y="{y:.1f}" text-anchor="{anchor}"{look}>{html.escape(text)}</text>'


def _cut(text: str, length: int) -> str:
    return text if len(text) <= length else text[: length - 1].rstrip(" ,") + "…"
