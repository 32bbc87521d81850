"""Section files by a grammar: mostly sound, with odd numbers, names and keys strewn in, and mutated text."""

from __future__ import annotations

from collections.abc import Callable

from hypothesis import strategies as st

# Few walls, so that what is read can be solved ten thousand times over.
COLUMNS, ROWS, PITCH = 3, 2, 50
SOUND_NUMBERS = ("2", "1.5", "3", '"t"', '"t * 2"', '"sqrt(4)"', "0.8", "12")
ODD_NUMBERS = (
    "0", "-1", "1e-9", "1e9", "1e31", "nan", "inf", "-0.0", "true", '""', '"t / 0"', '"u"', '"9 ** 9 ** 9"',
    "[]", "{}", "[1, 2]", "2001-02-03", "0x1F", "1_0", '"1e400"', "1e-31", '"-t"',
)  # fmt: skip
ODD_NAMES = (
    "", " ", "a b", "\\u001b[2J", "\\u202e", "../x", "=1+1", "wall 1", "x" * 61, "p00", "midline shear centre",
    "\\n", "\U0001f6e9", "unit T", "pi",
)  # fmt: skip
KEYS = (
    "thickness",
    "path",
    "name",
    "units",
    "at",
    "shear",
    "arc",
    "materials",
    "smooth",
    "line",
    "x",
    "walls",
)
SHARDS = (
    "",
    "[",
    "]",
    "[[",
    '"',
    "'''",
    "=",
    "\n",
    ".",
    ",",
    "-",
    "nan",
    "#",
    "\0",
    "e",
    "{",
    "}",
    "\u00a0",
    "\ud7ff",
)


def _mostly(sound: tuple[str, ...], odd: tuple[str, ...], one_in: int = 40) -> st.SearchStrategy[str]:
    """A sound value, now and then an odd one."""
    # hypothesis likes the ends of a range: the odd one is in the middle
    return st.integers(1, one_in).flatmap(lambda k: st.sampled_from(odd if k == one_in // 2 else sound))


numbers = _mostly(SOUND_NUMBERS, ODD_NUMBERS)
offsets = _mostly(
    ("0", "0", "3", "-7", "1.25", "1e-3", "1e-7", "-20"), ("nan", "1e12", "[0]", "u", "-50"), 900
)
fractions = _mostly(("0.5", "0.25", "0", "1"), ("-0.1", "1.5", "nan", '"x"', "1e-12"))
forces = _mostly(("0", "100", "-900", "1e3"), ODD_NUMBERS)


@st.composite
def section_texts(draw: st.DrawFn) -> str:
    """A section file."""
    names = [f"p{i}{j}" for i in range(COLUMNS) for j in range(ROWS)]
    head = ["schema = 1"] if draw(st.booleans()) else []
    head.append("units = " + draw(_mostly(('"mm N"', '"in lbf"', '"m kN"'), ('"mm"', '""', "5"), 60)))
    if draw(st.integers(0, 4)) == 0:
        title = draw(_mostly(("Beam", "\u0411\u0430\u043b\u043a\u0430"), ODD_NAMES, 8))
        head.append(f'title = "{title}"')
    if draw(st.integers(0, 5)) == 0:
        judged = draw(_mostly(("corrected", "lumped"), ("best", "")))
        head.append(f'judged = "{judged}"')
    t = draw(_mostly(("2", "1", "0.5", "5"), ODD_NUMBERS, 80))
    lines = [*head, "[parameters]", f"t = {t}", "[points]"]
    for i in range(COLUMNS):
        for j in range(ROWS):
            x, y = (f'"{PITCH * k} + {draw(offsets)}"' for k in (i, j))
            lines.append(f"p{i}{j} = [{x}, {y}]")
    if draw(st.integers(0, 3)) == 0:
        young = draw(_mostly(("70000", "2e5"), ODD_NUMBERS))
        lines += ["[materials.m]", f"E = {young}", "nu = 0.3"]
    for number, path in enumerate(draw(_paths())):
        lines += draw(_wall(names, path, number))
    for table in draw(st.lists(st.sampled_from(TABLES), max_size=3, unique=True)):
        lines += draw(table(names))
    for _ in range(draw(_few)):
        at = draw(st.integers(0, len(lines)))
        lines.insert(at, f"{draw(st.sampled_from(KEYS))} = {draw(numbers)}")
    return "\n".join(lines) + "\n"


_few = st.integers(0, 20).map(lambda k: max(0, k - 18))


@st.composite
def _paths(draw: st.DrawFn) -> list[list[tuple[int, int]]]:
    """Paths along lines of the grid, no line twice, each from a point that is there already."""
    here = [(draw(st.integers(0, COLUMNS - 1)), draw(st.integers(0, ROWS - 1)))]
    lines: set[frozenset[tuple[int, int]]] = set()
    paths = []
    for _ in range(draw(st.integers(1, 4))):
        path = [draw(st.sampled_from(here))]
        for _ in range(draw(st.integers(1, 3))):
            i, j = path[-1]
            near = [(i + 1, j), (i - 1, j), (i, j + 1), (i, j - 1)]
            free = [
                p
                for p in near
                if 0 <= p[0] < COLUMNS and 0 <= p[1] < ROWS and frozenset((path[-1], p)) not in lines
            ]
            if not free:
                break
            path.append(draw(st.sampled_from(free)))
            lines.add(frozenset(path[-2:]))
        if len(path) > 1:
            here += path[1:]
            paths.append(path)
    return paths


@st.composite
def _wall(draw: st.DrawFn, names: list[str], path: list[tuple[int, int]], number: int) -> list[str]:
    """One entry of [[walls]]."""
    told = [f'"p{a}{b}"' for a, b in path]
    if draw(st.integers(0, 60)) == 30:
        told = [f'"{each}"' for each in draw(st.lists(st.sampled_from([*names, *ODD_NAMES]), max_size=4))]
    lines = ["[[walls]]", f"path = [{', '.join(told)}]"]
    if number == 0 or draw(st.booleans()):
        name = draw(_mostly(("web" if number == 0 else f"wall {number}",), ODD_NAMES))
        lines.append(f'name = "{name}"')
    form = draw(st.integers(0, 5))
    t = draw(numbers)
    lines.append(f"thickness = {{ from = {t}, to = {draw(numbers)} }}" if form == 0 else f"thickness = {t}")
    extra = draw(st.integers(0, 12))
    if extra == 0 and len(path) == 2:
        lines.append(f"arc = {{ through = [{PITCH * path[0][0]} , {draw(st.integers(-60, 120))}] }}")
    elif extra == 1 and len(path) > 2:
        lines.append("smooth = true")
    elif extra == 2:
        lines.append(f"direct_share = {draw(fractions)}")
    elif extra == 3:
        lines.append("line = " + draw(st.sampled_from(['"left face"', '"right face"', '"midline"'])))
    elif extra == 4:
        lines.append("seen_by = " + draw(st.sampled_from(['"theory"', '"fe"', '"both"', '"none"'])))
    return lines


@st.composite
def _loads(draw: st.DrawFn, names: list[str]) -> list[str]:
    through = draw(st.sampled_from([f'"{names[0]}"', "[10, 5]", '"midline shear centre"', '"nowhere"']))
    name = draw(_mostly(("gust", "landing", "pull"), ODD_NAMES))
    return [
        "[[loads]]",
        f'name = "{name}"',
        f"shear = [{draw(forces)}, {draw(forces)}]",
        f"through = {through}",
        *([f"torque = {draw(forces)}"] if draw(st.booleans()) else []),
        *([f"moment = [{draw(forces)}, 0]"] if draw(st.booleans()) else []),
    ]


@st.composite
def _booms(draw: st.DrawFn, names: list[str]) -> list[str]:
    where = draw(
        st.sampled_from(
            [f'at = "{n}"' for n in names] + ['wall = "web"\nat = 0.5', 'wall = "web"\ncount = 3']
        )
    )
    return ["[[booms]]", where, "area = " + draw(_mostly(("40", "100"), ODD_NUMBERS))]


@st.composite
def _probes(draw: st.DrawFn, _: list[str]) -> list[str]:
    return ["[[probes]]", 'label = "rivets"', 'wall = "web"', f"at = {draw(fractions)}"]


@st.composite
def _corners(draw: st.DrawFn, names: list[str]) -> list[str]:
    where = draw(st.sampled_from(["every_bend", *names]))
    return [f"[corners.{where}]", f"inner_radius = {draw(numbers)}"]


@st.composite
def _stated(draw: st.DrawFn, _: list[str]) -> list[str]:
    quantity = draw(_mostly(("area", "torsion_constant", "shear_centre_x", "peak_flow"), ("beauty", "")))
    return ["[[stated]]", f'quantity = "{quantity}"', f"value = {draw(numbers)}", 'source = "sheet"']


@st.composite
def _mirror(draw: st.DrawFn, _: list[str]) -> list[str]:
    about = draw(st.sampled_from(['"x"', '"y"', '"x", "y"', '"z"']))
    return ["[mirror]", f"about = [{about}]"]


@st.composite
def _cuts(draw: st.DrawFn, _: list[str]) -> list[str]:
    return ["[[cuts]]", 'wall = "web"', f"at = {draw(fractions)}"]


TABLES: tuple[Callable[[list[str]], st.SearchStrategy[list[str]]], ...] = (
    _loads, _booms, _probes, _corners, _stated, _mirror, _cuts,
)  # fmt: skip


@st.composite
def mutated(draw: st.DrawFn, texts: st.SearchStrategy[str]) -> str:
    """A text with pieces cut out of it and shards put in."""
    text = draw(texts)
    for _ in range(draw(st.integers(0, 3))):
        at, cut = draw(st.integers(0, len(text))), draw(st.sampled_from([0, 0, 1, 2, 7, 60]))
        text = text[:at] + draw(st.sampled_from(SHARDS)) + text[at + cut :]
    return text
