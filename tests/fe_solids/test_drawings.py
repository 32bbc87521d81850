"""Outlines from DXF drawings, STEP faces and triangle meshes, written here and read back."""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ezdxf
import meshio
import numpy as np
import pytest
from numpy.testing import assert_allclose
from solid_shapes import rounded, solved

from crosscheck.drawings.dxf import DrawingRefused, dxf_outline
from fe_models import ClosedLine, OutlineError, Solid, outline_of_solid, rings_of_mesh, rings_of_step

PLATE = rounded([(0, 0), (70, 0), (70, 40), (0, 40)], [0, 10, 0, 6])
PLATE_AREA = 70 * 40 - (1 - math.pi / 4) * (100 + 36)


def area(*rings: ClosedLine) -> float:
    return outline_of_solid(Solid(rings)).moments(np.zeros(2)).area


def drawing(units: int = 4) -> tuple[Any, Any]:
    document = ezdxf.new(units=units)
    return document, document.modelspace()


def add_plate(space: Any, **attributes: Any) -> None:
    """The plate as a closed polyline with bulges: tan of a quarter of each arc's angle."""
    quarter = math.tan(math.pi / 8)
    corners = [(0, 0, 0), (60, 0, quarter), (70, 10, 0), (70, 40, 0), (6, 40, quarter), (0, 34, 0)]
    space.add_lwpolyline(corners, format="xyb", close=True, dxfattribs=attributes)


def save(document: Any, folder: Path) -> Path:
    path = folder / "part.dxf"
    document.saveas(path)
    return path


def refusal(path: Path, **options: Any) -> DrawingRefused:
    with pytest.raises(DrawingRefused) as caught:
        dxf_outline(path, "mm", **options)
    return caught.value


def test_polyline_with_bulges_is_exact(tmp_path: Path) -> None:
    document, space = drawing()
    add_plate(space)
    drawn = dxf_outline(save(document, tmp_path), "mm")
    assert_allclose(area(*drawn.rings), PLATE_AREA, rtol=1e-12)
    mine, other = (solved(r, accuracy=1e-5).quantities for r in (drawn.rings[0], PLATE))
    for name, q in mine.items():
        assert_allclose(q.value, other[name].value, rtol=1e-5, atol=1e-4, err_msg=name)
    assert drawn.notes == ("drawing in mm, as the drawing states", "outline from layers 0")


def test_lines_arcs_and_circles_in_any_order(tmp_path: Path) -> None:
    document, space = drawing()
    space.add_line((70, 40), (70, 10))
    space.add_arc((60, 10), 10, 270, 360)
    space.add_line((0, 0), (60, 0))
    space.add_line((0, 34), (0, 0))
    space.add_arc((6, 34), 6, 90, 180)
    space.add_line((6, 40), (70, 40))
    space.add_circle((30, 20), 5)
    space.add_text("web")
    drawn = dxf_outline(save(document, tmp_path), "mm")
    assert_allclose(area(*drawn.rings), PLATE_AREA - 25 * math.pi, rtol=1e-12)
    assert "passed over: 1 TEXT" in drawn.notes


def test_mirrored_entities(tmp_path: Path) -> None:
    """Extrusion (0, 0, -1): the entity's own x axis points left."""
    document, space = drawing()
    mirrored = {"extrusion": (0, 0, -1)}
    space.add_arc((-2, 1), 3, 20, 100, dxfattribs=mirrored)
    ends = [(2 - 3 * math.cos(math.radians(a)), 1 + 3 * math.sin(math.radians(a))) for a in (20, 100)]
    space.add_line(*ends)
    space.add_circle((-0.5, 3), 0.2, dxfattribs=mirrored)
    drawn = dxf_outline(save(document, tmp_path), "mm")
    outer = max(drawn.rings, key=lambda r: float(np.ptp(np.array(r.points), axis=0).max()))
    assert_allclose(sorted(outer.points), sorted(ends), rtol=1e-12)
    sweep = math.radians(80)
    assert_allclose(area(outer), 4.5 * (sweep - math.sin(sweep)), rtol=1e-12)
    (hole,) = (r for r in drawn.rings if r is not outer)
    assert_allclose(np.array(hole.points).mean(axis=0), (0.5, 3.0), rtol=1e-12)


@pytest.mark.parametrize("error", [1e-2, 1e-4])
def test_ellipse_and_spline_within_the_chord_error(error: float, tmp_path: Path) -> None:
    document, space = drawing()
    space.add_ellipse((1, 2), (6, 0), 0.5)
    drawn = dxf_outline(save(document, tmp_path), "mm", chord_error=error)
    assert_allclose(area(*drawn.rings), 18 * math.pi, rtol=2 * error / 3)
    assert f"1 splines or ellipses taken as arcs within {error:.3g} mm" in drawn.notes
    document, space = drawing()
    spline = space.add_spline()
    # a cubic Bezier arch over its base: area 3/20 (...) = 0.6 w h for control points (0,0) (0,h) (w,h) (w,0)
    spline.control_points = [(0, 0, 0), (0, 8, 0), (10, 8, 0), (10, 0, 0)]
    spline.knots = [0, 0, 0, 0, 1, 1, 1, 1]
    space.add_line((0, 0), (10, 0))
    rings = dxf_outline(save(document, tmp_path), "mm", chord_error=error).rings
    exact = bezier_area([(0, 0), (0, 8), (10, 8), (10, 0)])
    assert_allclose(area(*rings), exact, rtol=0, atol=20 * error)


def bezier_area(control: list[tuple[float, float]]) -> float:
    """Area between a cubic Bezier curve and its chord, by exact quadrature."""
    g, w = np.polynomial.legendre.leggauss(6)
    t = 0.5 * (g + 1)
    b = np.stack([(1 - t) ** 3, 3 * t * (1 - t) ** 2, 3 * t**2 * (1 - t), t**3])
    d = np.stack(
        [-3 * (1 - t) ** 2, 3 * (1 - t) ** 2 - 6 * t * (1 - t), 6 * t * (1 - t) - 3 * t**2, 3 * t**2]
    )
    p = np.array(control, dtype=float)
    return float(abs(0.5 * w @ ((p[:, 1] @ b) * (p[:, 0] @ d))))


def test_closed_spline(tmp_path: Path) -> None:
    """A periodic spline's own range leaves out its outer knots."""
    document, space = drawing()
    places = [(math.cos(a) * 10, math.sin(a) * 10, 0) for a in np.arange(24) * math.pi / 12]
    space.add_spline().set_closed(places, degree=3)
    (ring,) = dxf_outline(save(document, tmp_path), "mm", chord_error=1e-4).rings
    radii = np.hypot(*np.array(ring.points).T)
    assert_allclose(radii, radii.mean(), rtol=1e-3)
    assert_allclose(area(ring), math.pi * radii.mean() ** 2, rtol=1e-3)


def test_blocks_turned_scaled_and_nested(tmp_path: Path) -> None:
    document, space = drawing()
    add_plate(space)
    hole = document.blocks.new("hole")
    hole.add_circle((0, 0), 2)
    pair = document.blocks.new("pair")
    pair.add_blockref("hole", (0, 0))
    pair.add_blockref("hole", (0, 10), dxfattribs={"xscale": 2})
    space.add_blockref("pair", (20, 10))
    space.add_blockref("pair", (50, 20), dxfattribs={"rotation": 90, "xscale": -1})
    drawn = dxf_outline(save(document, tmp_path), "mm", chord_error=1e-5)
    assert len(drawn.rings) == 5
    assert_allclose(area(*drawn.rings), PLATE_AREA - 4 * math.pi * (1 + 2) * 2, rtol=1e-6)


def test_layers(tmp_path: Path) -> None:
    document, space = drawing()
    document.layers.add("STEEL")
    document.layers.add("AXES").off()
    add_plate(space, layer="STEEL")
    space.add_line((0, 20), (70, 20), dxfattribs={"layer": "AXES"})
    path = save(document, tmp_path)
    assert_allclose(area(*dxf_outline(path, "mm").rings), PLATE_AREA, rtol=1e-12)
    assert "left out by layer: 1 AXES" in dxf_outline(path, "mm").notes
    space.add_line((0, 20), (70, 20), dxfattribs={"layer": "0"})
    path = save(document, tmp_path)
    assert refusal(path).key == "file"
    assert_allclose(area(*dxf_outline(path, "mm", layers=["steel"]).rings), PLATE_AREA, rtol=1e-12)
    fault = refusal(path, layers=["IRON"])
    assert (fault.key, fault.found) == ("layers", '"IRON"')
    assert "STEEL" in fault.allowed


def test_blocks_layer_0_is_that_of_their_insert(tmp_path: Path) -> None:
    document, space = drawing()
    document.layers.add("STEEL")
    add_plate(document.blocks.new("plate"), layer="0")
    space.add_blockref("plate", (0, 0), dxfattribs={"layer": "STEEL"})
    assert dxf_outline(save(document, tmp_path), "mm", layers=["STEEL"]).rings


@pytest.mark.parametrize(
    ("code", "name", "factor"), [(1, "in", 25.4), (4, "mm", 1.0), (5, "cm", 10.0), (6, "m", 1e3)]
)
def test_units(code: int, name: str, factor: float, tmp_path: Path) -> None:
    document, space = drawing(code)
    add_plate(space)
    path = save(document, tmp_path)
    assert_allclose(area(*dxf_outline(path, "mm").rings), PLATE_AREA * factor**2, rtol=1e-12)
    assert_allclose(area(*dxf_outline(path, "in").rings), PLATE_AREA * (factor / 25.4) ** 2, rtol=1e-12)
    assert dxf_outline(path, "mm").notes[0] == f"drawing in {name}, as the drawing states"


def test_unit_is_asked_for(tmp_path: Path) -> None:
    document, space = drawing(0)
    add_plate(space)
    path = save(document, tmp_path)
    fault = refusal(path)
    assert fault.key == "drawing_unit"
    assert 'write drawing_unit = "mm"' in fault.remedy
    assert_allclose(area(*dxf_outline(path, "mm", drawing_unit="cm").rings), PLATE_AREA * 100, rtol=1e-12)
    document, space = drawing(1)
    add_plate(space)
    drawn = dxf_outline(save(document, tmp_path), "mm", drawing_unit="mm")
    assert_allclose(area(*drawn.rings), PLATE_AREA, rtol=1e-12)
    assert "states in itself" in drawn.notes[0]


def test_gaps_close_within_what_is_stated(tmp_path: Path) -> None:
    document, space = drawing()
    for a, b in (((0, 0), (10, 0)), ((10, 0.05), (10, 10)), ((10, 10), (0, 0.03))):
        space.add_line(a, b)
    path = save(document, tmp_path)
    fault = refusal(path)
    assert "open end at" in fault.found
    assert "gaps up to 1e-05 mm are closed" in fault.remedy
    drawn = dxf_outline(path, "mm", gap=0.06)
    assert_allclose(area(*drawn.rings), 50.0, atol=0.5, rtol=0)
    assert "gaps up to 0.05 mm closed (allowed: 0.06 mm)" in drawn.notes


def test_what_is_not_understood_is_named(tmp_path: Path) -> None:
    document, space = drawing()
    add_plate(space)
    space.add_3dface([(0, 0), (1, 1), (2, 0)])
    space.add_arc((0, 0), 1, 0, 90, dxfattribs={"extrusion": (1, 0, 0)})
    assert refusal(save(document, tmp_path)).found == "1 3DFACE, 1 oblique ARC"
    document, space = drawing()
    space.add_line((0, 0, 0), (1, 0, 5))
    assert "different heights" in refusal(save(document, tmp_path)).found
    document, _ = drawing()
    assert "no line" in refusal(save(document, tmp_path)).found
    (tmp_path / "bad.dxf").write_text("no drawing\n")
    assert refusal(tmp_path / "bad.dxf").allowed == "a DXF drawing"
    path = save(*drawing()[:1], tmp_path)
    path.write_bytes(path.read_bytes()[:2000])
    assert refusal(path).found


def test_missing_library_is_named(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(__import__("sys").modules, "ezdxf.filemanagement", None)
    assert "crosscheck[dxf]" in refusal(tmp_path / "part.dxf").remedy


Build = Callable[[Any], object]


def plane_plate(occ: Any) -> None:
    """Plate 10 x 20 with corners of radius 2 and an elliptic opening 3 x 1.5."""
    plate = occ.addRectangle(0, 0, 0, 10, 20, roundedRadius=2)
    opening = occ.addPlaneSurface([occ.addCurveLoop([occ.addEllipse(5, 10, 0, 3, 1.5)])])
    occ.cut([(2, plate)], [(2, opening)])


def standing_disc(occ: Any) -> None:
    disc = occ.addPlaneSurface([occ.addCurveLoop([occ.addCircle(3, 0, 0, 2)])])
    occ.rotate([(2, disc)], 0, 0, 0, 1, 0, 0, math.pi / 2)


def tilted_disc(occ: Any) -> None:
    disc = occ.addDisk(0, 0, 0, 2, 2)
    occ.rotate([(2, disc)], 0, 0, 0, 1, 0, 0, 0.3)


SHAPES: dict[str, Build] = {
    "plate": plane_plate,
    "standing": standing_disc,
    "tilted": tilted_disc,
    "box": lambda occ: occ.addBox(0, 0, 0, 1, 1, 1),
    "pipe": lambda occ: occ.extrude([(1, occ.addCircle(0, 0, 0, 1))], 0, 0, 2),
    "line": lambda occ: occ.addLine(occ.addPoint(0, 0, 0), occ.addPoint(1, 0, 0)),
}


@pytest.fixture(scope="module")
def step(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder of STEP files in mm, written before anything is read."""
    import gmsh

    folder = tmp_path_factory.mktemp("step")
    if not gmsh.isInitialized():
        gmsh.initialize(readConfigFiles=False, interruptible=False)
    gmsh.option.setNumber("General.Terminal", 0)
    gmsh.option.setString("Geometry.OCCTargetUnit", "MM")
    for name, build in SHAPES.items():
        gmsh.model.add(name)
        build(gmsh.model.occ)
        gmsh.model.occ.synchronize()
        gmsh.write(str(folder / f"{name}.step"))
        gmsh.model.remove()
    return folder


STEP_AREA = 200 - (4 - math.pi) * 4 - 4.5 * math.pi


@pytest.mark.parametrize(("unit", "factor"), [("mm", 1.0), ("m", 1e-3), ("in", 1 / 25.4)])
def test_step_face(unit: str, factor: float, step: Path) -> None:
    rings = rings_of_step(step / "plate.step", unit, 1e-5 * factor)
    assert_allclose(area(*rings), STEP_AREA * factor**2, rtol=1e-6)
    outer = max(rings, key=lambda r: np.ptp(np.array(r.points)))
    assert len(outer.points) == 8
    assert sum(t is not None for t in outer.through) == 4
    assert_allclose(area(outer), (STEP_AREA + 4.5 * math.pi) * factor**2, rtol=1e-9)


def test_step_face_across_y(step: Path) -> None:
    (ring,) = rings_of_step(step / "standing.step", "mm")
    assert len(ring.points) == 2
    assert_allclose(np.array(ring.points).mean(axis=0), (3.0, 0.0), rtol=0, atol=1e-9)
    assert_allclose(area(ring), 4 * math.pi, rtol=1e-9)


@pytest.mark.parametrize(
    ("name", "found"),
    [("tilted", "oblique"), ("box", "6 faces"), ("pipe", "of the kind cylinder"), ("line", "0 faces")],
)
def test_step_refused(name: str, found: str, step: Path) -> None:
    with pytest.raises(OutlineError, match=found) as caught:
        rings_of_step(step / f"{name}.step", "mm")
    assert caught.value.kind == "step"
    with pytest.raises(OutlineError, match="cannot be read"):
        rings_of_step(step / "none.step", "mm")


def plate_mesh() -> tuple[np.ndarray, np.ndarray]:
    """A square of 4 x 4 cells without the middle four, cut into triangles; some of them turned round."""
    x, y = np.meshgrid(np.arange(5.0), np.arange(5.0))
    points = np.column_stack([x.ravel(), y.ravel(), np.full(25, 7.0)])
    triangles = []
    for i in range(4):
        for j in range(4):
            if i in (1, 2) and j in (1, 2):
                continue
            a = 5 * j + i
            triangles += [[a, a + 1, a + 6], [a, a + 5, a + 6]]
    return points, np.array(triangles)


@pytest.mark.parametrize("ending", ["msh", "vtu", "stl", "obj", "off"])
def test_mesh_files(ending: str, tmp_path: Path) -> None:
    points, triangles = plate_mesh()
    path = tmp_path / f"plate.{ending}"
    mesh = meshio.Mesh(points, [("triangle", triangles)])
    meshio.write(path, mesh, **({"file_format": "gmsh22"} if ending == "msh" else {}))
    rings = rings_of_mesh(path)
    assert sorted(len(r.points) for r in rings) == [4, 4]
    assert_allclose(area(*rings), 12.0, rtol=1e-6)


def test_mesh_files_refused(tmp_path: Path) -> None:
    points, triangles = plate_mesh()
    bent = points.copy()
    bent[0, 2] = 8.0
    cases: dict[str, tuple[np.ndarray, str, np.ndarray, str]] = {
        "bent": (bent, "triangle", triangles, "not flat"),
        "quads": (points, "quad", np.array([[0, 1, 6, 5]]), "kind quad"),
        "lines": (points, "line", np.array([[0, 1]]), "kind none"),
        "twice": (points, "triangle", np.concatenate([triangles, triangles[:1]]), "overlap"),
        "touching": (points, "triangle", np.array([[0, 1, 6], [6, 7, 12]]), "touches itself"),
    }
    for name, (p, kind, cells, words) in cases.items():
        meshio.write(tmp_path / f"{name}.vtu", meshio.Mesh(p, [(kind, cells)]))
        with pytest.raises(OutlineError, match=words):
            rings_of_mesh(tmp_path / f"{name}.vtu")
    for name in ("bad.msh", "bad.vtu", "bad.stl", "none.obj"):
        if name.startswith("bad"):
            (tmp_path / name).write_text("no mesh\n")
        with pytest.raises(OutlineError, match="a file that"):
            rings_of_mesh(tmp_path / name)
    with pytest.raises(OutlineError, match=r"ending other than \.msh"):
        rings_of_mesh(tmp_path / "plate.doc")
