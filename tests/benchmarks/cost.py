"""What a comparison costs: against slenderness, cells, walls and accuracy; the share of each stage; memory.

Each table's first row is its measure: the others are ratios to it, taken in turns within one run.
"""

from __future__ import annotations

import cProfile
import pstats
import statistics
import subprocess
import sys
import time
from collections.abc import Callable, Iterator, Mapping, Sequence
from pathlib import Path
from tempfile import TemporaryDirectory

import beam_theory
import fe_models
from crosscheck import compare, read_section
from crosscheck.pictures import every_picture
from crosscheck.templates import template_text

PAIRS = 5
CASES = Path(__file__).resolve().parents[2] / "cases" / "sections"
# Function that a stage is, by file and name; times are cumulative and the stages do not overlap.
STAGES = {
    "outline": ("fe_models/outline.py", "outline"),
    "mesh": ("fe_models/mesh.py", "mesh"),
    "spaces": ("fe_models/space.py", "space"),
    "assembly": ("fe_models/space.py", "stiffness"),
    "factorization": ("", "<built-in method scipy.sparse.linalg._dsolve._superlu.gstrf>"),
    "fields of all loads": ("fe_models/fields.py", "solve_pairs"),
    "intervals, quantities": ("fe_models/quantities.py", "quantities"),
    "self-checks": ("fe_models/checks.py", "self_checks"),
    "theory, all levels": ("crosscheck/comparison/levels.py", "solve_levels"),
    "recovery and comparison": ("crosscheck/comparison/comparing.py", "join"),
    "pictures": ("crosscheck/pictures/__init__.py", "every_picture"),
}


def medians(work: Mapping[str, Callable[[], object]], pairs: int = PAIRS) -> dict[str, float]:
    """Median seconds of each piece of work, all taken in turns."""
    taken: dict[str, list[float]] = {name: [] for name in work}
    for call in work.values():
        call()
    for _ in range(pairs):
        for name, call in work.items():
            start = time.perf_counter()
            call()
            taken[name].append(time.perf_counter() - start)
    return {name: statistics.median(times) for name, times in taken.items()}


def channel(slenderness: float) -> fe_models.Section:
    """Midline 100 x 50, sharp corners."""
    points = {"a": (50.0, -50.0), "b": (0.0, -50.0), "c": (0.0, 50.0), "d": (50.0, 50.0)}
    t = 100.0 / slenderness
    return fe_models.Section(
        points, tuple(fe_models.Wall(p + q, p, q, (t, t)) for p, q in ("ab", "bc", "cd"))
    )


def slenderness_table(ratios: Sequence[float] = (10, 30, 100, 300, 1000, 3000)) -> Iterator[str]:
    """FE of the sharp channel at the default accuracy."""
    yield "| depth / thickness | unknowns | seconds | over the first |\n|---|---|---|---|"
    sections = {f"{ratio:g}": channel(ratio) for ratio in ratios}
    unknowns = {name: fe_models.solve(section).mesh.unknowns for name, section in sections.items()}
    times = medians({name: (lambda s=section: fe_models.solve(s)) for name, section in sections.items()})
    first = next(iter(times.values()))
    for name, seconds in times.items():
        yield f"| {name} | {unknowns[name]:,} | {seconds:.3f} | {seconds / first:.2f} |"


def accuracy_table(asked: Sequence[float] = (1e-3, 1e-4, 1e-5, 1e-6, 1e-7)) -> Iterator[str]:
    """FE of the sharp channel of depth / thickness 50."""
    yield "| accuracy | unknowns | passes | seconds | over the first |\n|---|---|---|---|---|"
    section = channel(50)
    meshes = {f"{a:.0e}": fe_models.solve(section, a).mesh for a in asked}
    times = medians({f"{a:.0e}": (lambda a=a: fe_models.solve(section, a)) for a in asked})
    first = next(iter(times.values()))
    for name, seconds in times.items():
        found = meshes[name]
        yield f"| {name} | {found.unknowns:,} | {found.passes} | {seconds:.3f} | {seconds / first:.2f} |"


def cells_table(counts: Sequence[int] = (1, 2, 5, 10, 20, 50, 100)) -> Iterator[str]:
    """Whole comparisons of boxes at accuracy 1e-4, each in a process of its own for its peak memory."""
    yield "| cells | walls | FE unknowns | seconds | seconds a cell | peak memory, MB |"
    yield "|---|---|---|---|---|---|"
    with TemporaryDirectory() as folder:
        for cells in counts:
            path = Path(folder) / f"{cells}.toml"
            path.write_text(template_text("n_cell_box", cells), encoding="utf-8")
            runs = [_measured(path) for _ in range(PAIRS if cells <= 20 else 1)]
            walls, unknowns = runs[0][:2]
            seconds = statistics.median(run[2] for run in runs)
            memory = max(run[3] for run in runs)
            size = f"{cells} | {walls:.0f} | {unknowns:,.0f}"
            yield f"| {size} | {seconds:.2f} | {seconds / cells:.3f} | {memory:.0f} |"


def _measured(path: Path) -> list[float]:
    """Walls, unknowns, seconds and peak memory [MB] of one comparison in a fresh process."""
    command = [sys.executable, str(Path(__file__)), "--measure", str(path)]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    return [float(word) for word in done.stdout.split()]


def walls_table(counts: Sequence[int] = (10, 100, 300, 1000)) -> Iterator[str]:
    """Classical theory alone: a plate with blades, one wall in two a blade."""
    yield "| walls | theory, seconds | over the first |\n|---|---|---|"
    sections = {}
    for count in counts:
        half = count // 2
        points = {f"p{i}": (10.0 * i, 0.0) for i in range(half + 1)}
        points |= {f"b{i}": (10.0 * i, 8.0) for i in range(half)}
        plate = [beam_theory.Wall(f"plate {i}", f"p{i}", f"p{i + 1}", (1.0, 1.0)) for i in range(half)]
        blades = [beam_theory.Wall(f"blade {i}", f"p{i}", f"b{i}", (1.5, 1.5)) for i in range(half)]
        sections[str(count)] = beam_theory.Section(points, (*plate, *blades))
    times = medians({name: (lambda s=section: beam_theory.solve(s)) for name, section in sections.items()})
    first = next(iter(times.values()))
    for name, seconds in times.items():
        yield f"| {name} | {seconds:.4f} | {seconds / first:.1f} |"


def shares_table(case: str) -> Iterator[str]:
    """Share of each stage in a warm comparison of a shipped case with its pictures, from one profile."""
    section = read_section(CASES / f"{case}.toml")
    every_picture(compare(section, pictures=True))
    profile = cProfile.Profile()
    profile.enable()
    every_picture(compare(section, pictures=True))
    profile.disable()
    stats = pstats.Stats(profile)
    total = stats.total_tt  # type: ignore[attr-defined]
    yield f"| stage of {case} | share without pictures |\n|---|---|"
    found = {
        stage: sum(
            row[3]
            for (path, _, name), row in stats.stats.items()  # type: ignore[attr-defined]
            if name == function and path.replace("\\", "/").endswith(file)
        )
        for stage, (file, function) in STAGES.items()
    }
    rest = total - found["pictures"]
    for stage, seconds in found.items():
        if stage != "pictures":
            yield f"| {stage} | {100 * seconds / rest:.0f} % |"
    yield f"| pictures, over all of the above | {found['pictures'] / rest:.0f} x |"


def main() -> None:
    """Measure one comparison, for `cells_table`."""
    section = read_section(sys.argv[2])
    start = time.perf_counter()
    result = compare(section, 1e-4)
    seconds = time.perf_counter() - start
    # of this process alone: getrusage would carry over the parent's peak
    status = Path("/proc/self/status").read_text(encoding="ascii")
    memory = int(status.split("VmHWM:")[1].split()[0]) / 1024
    print(len(section.walls), result.mesh.unknowns, seconds, memory)


if __name__ == "__main__":
    main()
