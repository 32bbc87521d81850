"""Mesh and fields to VTU and MSH, read back by other libraries than the one that writes."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.testing import assert_allclose
from solid_shapes import rectangle, row, solved

import fe_models.mesh_file
from fe_models import Actions, ClosedLine, LibraryError, Section, Solution, Wall, solve, write_fields

WARPING = "warping function about the shear centre [mm^2]"
STATIC_T = "shear stress of unit T, static field [1/mm^3]"
STATIC_VY = "shear stress of unit Vy, static field [1/mm^2]"
KINEMATIC_VY = "shear stress of unit Vy, kinematic field [1/mm^2]"
SHARE_T = "share of the element in the error gap of unit T [-]"


@pytest.fixture(scope="module")
def ring() -> Solution:
    return solved(ClosedLine.circle((3.0, 4.0), 2.0), ClosedLine.circle((3.0, 4.0), 1.0))


def read_vtu(path: Path) -> Any:
    vtk = pytest.importorskip("vtk")
    reader = vtk.vtkXMLUnstructuredGridReader()
    reader.SetFileName(str(path))
    reader.Update()
    return reader.GetOutput()


def arrays(data: Any) -> dict[str, np.ndarray]:
    from vtk.util.numpy_support import vtk_to_numpy

    return {data.GetArrayName(i): vtk_to_numpy(data.GetArray(i)) for i in range(data.GetNumberOfArrays())}


def probed(grid: Any, places: list[tuple[float, float]]) -> dict[str, np.ndarray]:
    """Point fields at places, interpolated by the other library."""
    import vtk

    points = vtk.vtkPoints()
    for x, y in places:
        points.InsertNextPoint(x, y, 0.0)
    wanted = vtk.vtkPolyData()
    wanted.SetPoints(points)
    probe = vtk.vtkProbeFilter()
    probe.SetInputData(wanted)
    probe.SetSourceData(grid)
    probe.Update()
    found = arrays(probe.GetOutput().GetPointData())
    assert found["vtkValidPointMask"].all()
    return found


def test_vtu_read_by_another_library(ring: Solution, tmp_path: Path) -> None:
    """Ring of radii 1 and 2: tau = T r / J along the circle, no warping."""
    write_fields(ring, tmp_path / "ring.vtu", "mm")
    grid = read_vtu(tmp_path / "ring.vtu")
    order, elements = ring.mesh.order, ring.mesh.elements
    assert grid.GetNumberOfCells() == elements * order**2
    angles = np.array([0.3, 1.7, 4.0])
    r = np.array([1.2, 1.5, 1.8])
    places = list(zip(3 + r * np.cos(angles), 4 + r * np.sin(angles), strict=True))
    got = probed(grid, places)
    j = math.pi / 2 * (2**4 - 1)
    tau = np.stack([-np.sin(angles), np.cos(angles), 0 * angles], axis=1) * (r / j)[:, None]
    assert_allclose(got[STATIC_T], tau, rtol=0, atol=2e-4)
    assert_allclose(got[WARPING], 0.0, rtol=0, atol=1e-4)
    phi = got["stress function of unit rate of twist, G = 1 [mm^2]"]
    assert_allclose(phi, (4 - r**2) / 2, rtol=0, atol=5e-3)
    cells = arrays(grid.GetCellData())
    assert_allclose(cells[SHARE_T].sum() / order**2, 1.0, rtol=1e-9)
    assert (cells["wall number [-]"] == 0).all()
    assert cells["element number [-]"].max() == elements - 1


def test_values_at_given_points_are_those_of_the_solution(tmp_path: Path) -> None:
    s = solved(rectangle(3.0, 2.0))
    write_fields(s, tmp_path / "plate.vtu", "mm")
    got = probed(read_vtu(tmp_path / "plate.vtu"), [(0.2, 0.5), (-1.1, -0.7)])
    own = s.stress_at([(0.2, 0.5), (-1.1, -0.7)], Actions(shear=(0.0, 1.0)))
    mean = 0.5 * (got[STATIC_VY] + got[KINEMATIC_VY])[:, :2]
    assert_allclose(mean, own.shear, rtol=0, atol=0.02)
    # tau_y = 1.5 V/A (1 - (2 y/h)^2), linear between nodes
    assert_allclose(got[STATIC_VY][:, 1], [0.25 * 0.75, 0.25 * 0.51], rtol=0, atol=0.02)


def test_walls_are_named(tmp_path: Path) -> None:
    points = {"a": (0.0, 0.0), "b": (20.0, 0.0), "c": (20.0, 30.0)}
    section = Section(points, (Wall("flange", "a", "b", (1.0, 1.0)), Wall("web, thin", "b", "c", (2.0, 2.0))))
    s = solve(section)
    write_fields(s, str(tmp_path / "angle.vtu"))
    grid = read_vtu(tmp_path / "angle.vtu")
    names = grid.GetFieldData().GetAbstractArray("wall names")
    assert [names.GetValue(i) for i in range(names.GetNumberOfValues())] == ["flange", "web, thin"]
    cells = arrays(grid.GetCellData())
    assert set(cells["wall number [-]"]) == {0, 1}
    assert cells["part number (joints, then strips) [-]"].max() == s.mesh.strips + s.mesh.joints - 1
    assert "warping function about the shear centre [L^2]" in arrays(grid.GetPointData())


def test_msh_read_by_the_mesh_generator(ring: Solution, tmp_path: Path) -> None:
    import gmsh

    write_fields(ring, tmp_path / "ring.msh", "mm")
    started = gmsh.isInitialized()
    if not started:
        gmsh.initialize(readConfigFiles=False, interruptible=False)
    try:
        gmsh.option.setNumber("General.Terminal", 0)
        gmsh.open(str(tmp_path / "ring.msh"))
        (group,) = gmsh.model.getPhysicalGroups(2)
        assert gmsh.model.getPhysicalName(*group) == "solid"
        views = {gmsh.view.option.getString(v, "Name"): v for v in gmsh.view.getTags()}
        j = math.pi / 2 * (2**4 - 1)
        values, _ = gmsh.view.probe(views[STATIC_T], 3.0, 5.5, 0.0)
        assert_allclose(values[:3], (-1.5 / j, 0.0, 0.0), rtol=0, atol=2e-4)
    finally:
        gmsh.clear()


def test_another_ending_is_refused(ring: Solution, tmp_path: Path) -> None:
    with pytest.raises(ValueError, match=r"must end in .vtu or .msh, got .png"):
        write_fields(ring, tmp_path / "ring.png")
    assert not list(tmp_path.iterdir())


def test_written_whole_or_not_at_all(ring: Solution, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "ring.vtu"
    target.write_text("the old file")

    def broken(*_: object) -> None:
        raise OSError("disk full")

    monkeypatch.setattr(fe_models.mesh_file, "_name_walls", broken)
    with pytest.raises(OSError, match="disk full"):
        write_fields(ring, target)
    assert target.read_text() == "the old file"
    assert [p.name for p in tmp_path.iterdir()] == ["ring.vtu"]
    with pytest.raises(OSError, match="nowhere"):
        write_fields(ring, tmp_path / "nowhere" / "ring.vtu")


def test_missing_library_is_named(ring: Solution, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(__import__("sys").modules, "meshio", None)
    with pytest.raises(LibraryError, match=r"meshio: pip install"):
        write_fields(ring, tmp_path / "ring.vtu")


def test_stress_with_nu_is_a_field_of_its_own(tmp_path: Path) -> None:
    """Round bar, nu = 0.3: the published stress at the centre, and 3/2 V/A without nu."""
    s = solved(ClosedLine.circle((0.0, 0.0), 1.0), nu=0.3)
    write_fields(s, tmp_path / "bar.vtu", "mm")
    got = probed(read_vtu(tmp_path / "bar.vtu"), [(0.0, 0.0)])
    with_nu = got["shear stress of unit Vy with nu = 0.3, static field [1/mm^2]"][0]
    assert_allclose(with_nu, (0.0, row("B01T")["value"] / math.pi, 0.0), rtol=0, atol=2e-3)
    assert_allclose(got[STATIC_VY][0], (0.0, 1.5 / math.pi, 0.0), rtol=0, atol=2e-3)
