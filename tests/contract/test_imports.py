"""Who may import whom: the independence of both sides is the evidence, so it is checked."""

from __future__ import annotations

import ast
import importlib
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGES = ("crosscheck", "beam_theory", "fe_models")


def imported(path: Path) -> set[str]:
    """Top-level names of everything a file imports, anywhere in it; relative imports left out."""
    found: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found |= {alias.name.split(".")[0] for alias in node.names}
        elif isinstance(node, ast.ImportFrom) and node.level == 0 and node.module:
            found.add(node.module.split(".")[0])
    return found


def sources(package: str) -> list[Path]:
    return sorted((ROOT / package).rglob("*.py"))


@pytest.mark.parametrize(
    ("package", "others"),
    [("beam_theory", {"fe_models", "crosscheck"}), ("fe_models", {"beam_theory", "crosscheck"})],
)
def test_the_two_sides_share_no_code(package, others):
    for path in sources(package):
        assert not imported(path) & others, path


@pytest.mark.parametrize(
    ("package", "allowed"),
    [
        ("beam_theory", {"numpy", "scipy"}),
        ("fe_models", {"numpy", "scipy", "gmsh", "meshio", "shapely"}),
    ],
)
def test_each_side_uses_general_purpose_libraries_only(package, allowed):
    used = set().union(*(imported(path) for path in sources(package)))
    assert used - set(sys.stdlib_module_names) - {package} <= allowed


@pytest.mark.parametrize("library", ["gmsh", "meshio"])
def test_native_libraries_are_imported_in_one_file(library):
    users = [path for package in PACKAGES for path in sources(package) if library in imported(path)]
    assert len(users) <= 1, users


def test_matplotlib_is_imported_only_where_pictures_are_drawn():
    for package in PACKAGES:
        for path in sources(package):
            if "matplotlib" in imported(path):
                assert "pictures" in path.parts, path


def test_no_print_and_no_exit_below_the_command_line():
    for package in PACKAGES:
        for path in sources(package):
            if "commands" in path.parts or path.name in ("command_line.py", "__main__.py"):
                continue
            for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
                if isinstance(node, ast.Call):
                    name = ast.unparse(node.func)
                    assert name not in ("print", "sys.exit", "exit", "quit", "eval", "exec"), path


@pytest.mark.parametrize("package", ["beam_theory", "fe_models"])
def test_public_names_are_all_there_and_all_listed(package):
    module = importlib.import_module(package)
    tree = ast.parse((ROOT / package / "__init__.py").read_text(encoding="utf-8"))
    brought = {
        alias.asname or alias.name
        for node in tree.body
        if isinstance(node, ast.ImportFrom) and node.module != "__future__"
        for alias in node.names
    }
    assert set(module.__all__) == brought
    assert len(set(module.__all__)) == len(module.__all__)
    for name in module.__all__:
        thing = getattr(module, name)
        assert not callable(thing) or thing.__doc__, name
