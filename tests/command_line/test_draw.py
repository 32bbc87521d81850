"""``crosscheck draw``."""

from __future__ import annotations

import pytest

MAGIC = {".svg": b"<?xml", ".png": b"\x89PNG", ".pdf": b"%PDF"}


@pytest.mark.parametrize("suffix", list(MAGIC))
def test_picture_by_its_ending(run, channel, tmp_path, suffix):
    out = tmp_path / f"picture{suffix}"
    ran = run("draw", channel, "--out", out)
    assert (ran.status, ran.out, ran.err) == (0, "", "")
    assert out.read_bytes().startswith(MAGIC[suffix])


def test_unknown_ending_is_bad_input(run, channel, tmp_path):
    ran = run("draw", channel, "--out", tmp_path / "picture.gif")
    assert ran.status == 2
    assert "must end in .svg, .png, .pdf" in ran.err
    assert not (tmp_path / "picture.gif").exists()


def test_folder_that_is_not_there(run, channel, tmp_path):
    ran = run("draw", channel, "--out", tmp_path / "none" / "picture.svg")
    assert ran.status == 2
    assert len(ran.err.splitlines()) == 1


def test_bad_section_file(run, tmp_path):
    ran = run("draw", tmp_path / "missing.toml", "--out", tmp_path / "picture.svg")
    assert ran.status == 2
    assert "missing.toml" in ran.err
