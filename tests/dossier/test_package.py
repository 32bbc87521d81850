"""The package: whole, sealed, repeatable, and its numbers come out again."""

from __future__ import annotations

import hashlib
import importlib.util
import json
import shutil

import pytest

from crosscheck.command_line import main
from crosscheck.dossier.checking import check_package, compared
from crosscheck.dossier.package import MANIFEST, manifest_bytes, sealed
from crosscheck.whole_files import write_tree

from .conftest import DAY
from .test_writers import pdf_text


def quiet(_: str) -> None:
    """Nobody is told."""


def altered(data: bytes, at: int) -> bytes:
    """The same bytes but for one."""
    return data[:at] + bytes([data[at] ^ 1]) + data[at + 1 :]


def test_the_check_passes_and_every_number_comes_out_again(package, capsys):
    assert main(["dossier", "--check", str(package.folder)]) == 0
    said = capsys.readouterr().out
    assert "numbers come out again" in said
    assert "whole, unaltered" in said


def test_a_changed_byte_of_any_file_is_found(package, tmp_path):
    copy = tmp_path / "copy"
    shutil.copytree(package.folder, copy)
    files = sorted(path for path in copy.rglob("*") if path.is_file())
    assert len(files) > 30
    for path in files:
        data = path.read_bytes()
        for at in (0, len(data) // 2, len(data) - 1):
            path.write_bytes(altered(data, at))
            faults = check_package(copy, quiet).faults
            assert len(faults) == 1, (path, at)
            assert path.name in faults[0]
        path.write_bytes(data)


def test_missing_and_added_files_are_found(package, tmp_path):
    copy = tmp_path / "copy"
    shutil.copytree(package.folder, copy)
    (copy / "dossier.pdf").unlink()
    (copy / "rail" / "more.txt").write_text("x", encoding="utf-8")
    faults = " ".join(check_package(copy, quiet).faults)
    assert "dossier.pdf: missing" in faults
    assert "more.txt: not in the manifest" in faults


@pytest.mark.long
def test_other_numbers_under_a_fresh_seal_are_found(package, tmp_path):
    copy = tmp_path / "copy"
    shutil.copytree(package.folder, copy)
    path = copy / "rail" / "result.json"
    result = json.loads(path.read_text(encoding="utf-8"))
    row = next(row for row in result["quantities"] if row["name"] == "torsion_constant")
    row["fe"]["value"] *= 1.0 + 1e-6
    path.write_text(json.dumps(result), encoding="utf-8")
    manifest = json.loads((copy / MANIFEST).read_text(encoding="utf-8"))
    manifest.pop("seal")
    manifest["files"]["rail/result.json"] = hashlib.sha256(path.read_bytes()).hexdigest()
    (copy / MANIFEST).write_bytes(sealed(manifest))
    faults = check_package(copy, quiet).faults
    assert len(faults) == 1
    assert "numbers do not come out again" in faults[0]
    assert "fe.value" in faults[0]


@pytest.mark.long
def test_two_days_differ_in_date_and_provenance_only(package, tmp_path, monkeypatch):
    monkeypatch.setenv("SOURCE_DATE_EPOCH", str(DAY + 86_400))
    other = tmp_path / "package"
    main(["dossier", str(package.section), "--evidence", str(package.evidence), "--out", str(other)])
    names = sorted(p.relative_to(package.folder).as_posix() for p in package.folder.rglob("*") if p.is_file())
    assert names == sorted(p.relative_to(other).as_posix() for p in other.rglob("*") if p.is_file())
    differing = [n for n in names if (package.folder / n).read_bytes() != (other / n).read_bytes()]
    assert set(differing) <= {"dossier.pdf", "dossier.html", "rail/result.json", MANIFEST}
    first, second = (
        package.text("dossier.html").splitlines(),
        (other / "dossier.html").read_text().splitlines(),
    )
    changed = [(a, b) for a, b in zip(first, second, strict=True) if a != b]
    assert changed
    for a, b in changed:
        assert a.replace("2026-01-01", "DAY") == b.replace("2026-01-02", "DAY")
    first, second = (pdf_text((folder / "dossier.pdf").read_bytes()) for folder in (package.folder, other))
    assert "2026-01-01" in first
    assert first.replace("2026-01-01", "DAY") == second.replace("2026-01-02", "DAY")
    results = [json.loads((folder / "rail/result.json").read_text()) for folder in (package.folder, other)]
    for result in results:
        result.pop("provenance")
    assert results[0] == results[1]
    manifests = [json.loads((folder / MANIFEST).read_text()) for folder in (package.folder, other)]
    assert manifests[0]["run"] == manifests[1]["run"]
    assert manifests[0]["options"] == manifests[1]["options"]


def test_numbers_are_told_apart_beyond_round_off_only():
    old = {"a": [{"fe": 2.0, "fe_error": 0.1}, {"fe": 1e-17, "fe_error": 0.1}], "provenance": 1}
    near = {"a": [{"fe": 2.0 + 1e-12, "fe_error": 0.1}, {"fe": -3e-17, "fe_error": 0.1}], "provenance": 2}
    far = {"a": [{"fe": 2.0 + 1e-6, "fe_error": 0.1}, {"fe": 1e-17, "fe_error": 0.1}], "provenance": 1}
    assert not [told for _, told, _ in compared(old, near) if told]
    assert [where for where, told, _ in compared(old, far) if told] == ["a[0].fe"]
    orders = [{"indices": [{"interval_order": order}]} for order in (7.0, 7.0 + 1e-7, 7.001)]
    assert not [told for _, told, _ in compared(orders[0], orders[1]) if told]
    assert [told for _, told, _ in compared(orders[0], orders[2]) if told]
    assert [told for _, told, _ in compared({"v": "within"}, {"v": "outside"}) if told]


def test_a_folder_that_is_no_package_is_left_alone(package, tmp_path, capsys):
    (tmp_path / "notes.txt").write_text("mine", encoding="utf-8")
    assert main(["dossier", str(package.section), "--out", str(tmp_path)]) == 2
    assert "an empty one or an older package" in capsys.readouterr().err
    assert (tmp_path / "notes.txt").read_text(encoding="utf-8") == "mine"


def test_bad_input_is_told_and_nothing_written(package, tmp_path, capsys):
    out = tmp_path / "out"
    broken = tmp_path / "broken.toml"
    broken.write_text("schema = 1\n", encoding="utf-8")
    assert main(["dossier", str(broken), "--out", str(out)]) == 2
    assert main(["dossier", str(package.section), "--out", str(out), "--evidence", str(broken)]) == 2
    assert main(["dossier", str(package.section), "--out", str(out), "--hand-sheet", "nobody"]) == 2
    assert main(["dossier", "--check", str(tmp_path / "nothing")]) == 2
    assert main(["dossier", "--check", str(out), "--out", str(out)]) == 2
    assert main(["dossier"]) == 2
    assert not out.exists()
    assert "Traceback" not in capsys.readouterr().err


def test_without_the_typesetter_the_command_says_what_to_install(package, tmp_path, monkeypatch, capsys):
    monkeypatch.setattr(importlib.util, "find_spec", lambda name: None)
    assert main(["dossier", str(package.section), "--out", str(tmp_path / "out")]) == 2
    assert 'pip install "crosscheck[dossier]"' in capsys.readouterr().err


def test_a_manifest_hashes_every_file():
    content = json.loads(manifest_bytes("run", "day", {}, {"a/b": b"x"}))
    assert content["files"] == {"a/b": hashlib.sha256(b"x").hexdigest()}


def test_a_tree_is_written_whole_or_not_at_all(tmp_path):
    folder = tmp_path / "tree"
    write_tree(folder, {"a.txt": b"1", "b/c.txt": b"2"})
    with pytest.raises(ValueError, match="inside"):
        write_tree(folder, {"../x": b""})
    write_tree(folder, {"b/d.txt": b"3"})
    assert [p.relative_to(folder).as_posix() for p in folder.rglob("*.txt")] == ["b/d.txt"]
    assert [p.name for p in tmp_path.iterdir()] == ["tree"]
