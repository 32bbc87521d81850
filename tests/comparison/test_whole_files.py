"""Files appear whole or not at all."""

from __future__ import annotations

import pytest

from crosscheck.whole_files import write_folder, write_whole


def test_old_content_is_replaced_whole(tmp_path):
    path = tmp_path / "result.json"
    path.write_bytes(b"old")
    write_whole(path, b"new")
    assert path.read_bytes() == b"new"
    assert [entry.name for entry in tmp_path.iterdir()] == ["result.json"]


def test_nothing_is_left_behind_when_replacing_fails(tmp_path):
    (tmp_path / "result.json").mkdir()
    with pytest.raises(OSError, match="directory"):
        write_whole(tmp_path / "result.json", b"new")
    assert [entry.name for entry in tmp_path.iterdir()] == ["result.json"]


@pytest.mark.parametrize("name", ["../up.svg", "a/b.svg", "", "..", "/abs.svg"])
def test_names_with_a_folder_are_refused_before_anything_is_written(tmp_path, name):
    with pytest.raises(ValueError, match="plain file name"):
        write_folder(tmp_path / "out", {"good.svg": b"x", name: b"y"})
    assert not (tmp_path / "out").exists()
