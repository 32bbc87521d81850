"""The house: its files, their size, the README's commands."""

from __future__ import annotations

import re
import shutil
import subprocess
from pathlib import Path

from fe_models.fill import SYSTEM_LIBRARIES

ROOT = Path(__file__).resolve().parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
FILES = {"README.md", "DEVELOPERS.md", "pyproject.toml", "LICENSE"}
FOLDERS = {"crosscheck", "beam_theory", "fe_models", "cases", "tests"}


def tracked() -> list[Path]:
    """Files of the project relative to its root: as git lists them, or all of a copy without git."""
    if shutil.which("git") and (ROOT / ".git").exists():
        listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True)
        return [path for line in listed.stdout.splitlines() if (ROOT / (path := Path(line))).exists()]
    return [
        path.relative_to(ROOT)
        for name in FILES | FOLDERS
        for path in ((ROOT / name).rglob("*") if name in FOLDERS else [ROOT / name])
        if path.is_file() and path.suffix != ".pyc"
    ]


def test_top_level_holds_only_what_the_design_says():
    top = {path.parts[0] for path in tracked()}
    assert {name for name in top if not name.startswith(".")} <= FILES | FOLDERS


def test_no_python_file_is_longer_than_can_be_read_at_a_sitting():
    long = {p: n for p in tracked() if p.suffix == ".py" and (n := (ROOT / p).read_text().count("\n")) > 400}
    assert not long


def test_readme_has_both_commands_on_one_line_each():
    commands = re.findall(r"^    (python3 -m venv .*)$", README, flags=re.MULTILINE)
    assert len(commands) >= 2
    assert "crosscheck compare" in commands[0]
    assert "pytest" in commands[1]
    case = re.search(r"compare (\S+\.toml)", commands[0])
    assert case is not None
    assert (ROOT / case[1]).is_file()


def test_readme_states_the_system_libraries_of_the_error_message():
    assert SYSTEM_LIBRARIES in README


def test_readme_says_what_the_product_is_not():
    for words in ("not test evidence", "not approval", "licensed engineer"):
        assert words in README


def test_tracked_text_names_no_machine_path():
    pattern = re.compile(r"(^|[^A-Za-z0-9._])/(w" + r"ork|t" + r"mp|r" + r"oot|h" + r"ome)/[A-Za-z.]")
    for path in tracked():
        if path.suffix in (".py", ".md", ".toml", ".json", ".csv") or path.name == "run":
            assert not pattern.search((ROOT / path).read_text(encoding="utf-8")), path
