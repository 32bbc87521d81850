"""Every kind of wall and load in one file, through the command line."""

from __future__ import annotations

import json


def test_new_features_all_at_once(run, tmp_path):
    """Arc, taper, boom, second material, corners and every resultant in one file."""
    path = tmp_path / "all.toml"
    path.write_text(EVERYTHING)
    ran = run("compare", path, "--json", "-")
    assert ran.status in (0, 1)
    read = json.loads(ran.out)
    assert all(check["passed"] for check in read["checks"])
    names = {row["name"] for row in read["quantities"] if row["load"] == "all"}
    assert names == {
        "peak_flow", "flow_at_probes", "rate_of_twist", "direct_stress", "von_mises_stress", "surface_shear"
    }  # fmt: skip
    assert read["boom_fibres"][0]["reason"]
    assert read["fillet_peaks"]


EVERYTHING = """\
units = "mm N"
base_material = "sheet"
[materials.sheet]
E = 72000
nu = 0.33
[materials.steel]
E = 205000
nu = 0.29
[points]
low = [0, -60]
high = [0, 60]
edge = [70, -60]
lip = [70, -40]
[[walls]]
name = "nose"
path = ["high", "low"]
arc = { through = [-60, 0] }
thickness = 2
[[walls]]
name = "web"
path = ["low", "high"]
thickness = 3
material = "steel"
[[walls]]
name = "flange"
path = ["low", "edge"]
thickness = { from = 3, to = 2 }
[[walls]]
name = "lip"
path = ["edge", "lip"]
thickness = 2
[[booms]]
at = "high"
area = 150
[corners]
edge = { inner_radius = 3 }
[[loads]]
name = "all"
shear = [100, -900]
through = [20, 0]
torque = 5000
axial = 700
moment = [80000, -9000]
bimoment = 40000
"""
