"""What goes wrong around a run: native code that dies or hangs, Ctrl-C, disks, fonts, locales, two runs."""

from __future__ import annotations

import errno
import json
import os
import signal
import subprocess
import sys
import threading
import time
from pathlib import Path

import pytest
from trial import CHANNEL

import crosscheck.whole_files
from crosscheck.command_line import main
from crosscheck.whole_files import write_folder

SWEEP = (
    "sweep",
    "given.toml",
    "--vary",
    "t in 1, 2, 3, 4",
    "--out",
    "out",
    "--workers",
    "1",
    "--accuracy",
    "1e-2",
)
# Stands before the real mesh generator on the path of a child process; only a test lays it there.
MESHER = """\
import importlib.util, os, sys, time
home = os.path.dirname(os.path.abspath(__file__))
path = [p for p in sys.path if os.path.abspath(p or ".") != home]
spec = importlib.util.spec_from_file_location("real_gmsh", importlib.machinery.PathFinder.find_spec("gmsh", path).origin)
real = importlib.util.module_from_spec(spec)
spec.loader.exec_module(real)
whole = real.model.mesh.generate
def generate(dim=3):
    try:
        os.close(os.open(os.path.join(home, "met"), os.O_CREAT | os.O_EXCL))
    except FileExistsError:
        return whole(dim)
    FAULT
real.model.mesh.generate = staticmethod(generate)
sys.modules["gmsh"] = real
"""
# Native code that does not hear of signals: a product of large matrices, the interpreter's lock let go.
HANG = "import numpy; a = numpy.ones((14000, 14000)); a @ a"


@pytest.fixture
def given(tmp_path, monkeypatch):
    """A folder with the channel in it, which is the current one."""
    folder = tmp_path / "given"
    folder.mkdir()
    (folder / "given.toml").write_text(CHANNEL)
    monkeypatch.chdir(folder)
    return folder


def started(folder, *arguments, fault="", **environment):
    """The program in a process of its own; with a fault in the mesh generator where one is given."""
    path = os.environ.get("PYTHONPATH", "")
    if fault:
        (folder.parent / "mesher").mkdir()
        (folder.parent / "mesher" / "gmsh.py").write_text(MESHER.replace("FAULT", fault))
        path = f"{folder.parent / 'mesher'}{os.pathsep}{path}"
    root = str(Path(__file__).parents[2])
    return subprocess.Popen(
        [sys.executable, "-m", "crosscheck", *arguments],
        cwd=folder,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        env={**os.environ, "PYTHONPATH": f"{path}{os.pathsep}{root}", **environment},
    )


def ran(*arguments, **more):
    """Exit status and both streams."""
    with started(*arguments, **more) as process:
        out, err = process.communicate(timeout=250)
    return process.returncode, out, err


def left(folder):
    """Files below a folder, without those that were given."""
    return sorted(
        p.relative_to(folder).as_posix() for p in folder.rglob("*") if p.is_file() and p.name != "given.toml"
    )


@pytest.mark.parametrize(("fault", "kind"), [("os.abort()", "crash"), ("time.sleep(600)", "time-out")])
def test_a_mesh_generator_that_dies_or_hangs_costs_one_member(given, fault, kind):
    limit = ("--time-limit", "20") if kind == "time-out" else ()
    status, _, err = ran(given, *SWEEP, *limit, fault=fault)
    assert "Traceback" not in err
    assert status == 3
    found = json.loads((given / "out" / "sweep.json").read_text())
    assert kind in json.dumps(found)
    assert sum(1 for line in (given / "out" / "journal.jsonl").read_text().splitlines()) == 5
    assert not [name for name in left(given) if name.endswith(".part")]


def test_a_mesh_generator_that_dies_costs_one_section_of_several(given):
    (given / "other.toml").write_text(CHANNEL)
    command = (
        "compare",
        "given.toml",
        "other.toml",
        "--accuracy",
        "1e-2",
        "--json",
        "out.json",
        "--workers",
        "1",
    )
    status, _, err = ran(given, *command, fault="os.abort()")
    assert status == 3
    assert "given.toml: crash: the worker process ended with signal 6" in err
    assert json.loads((given / "out.json").read_text())["quantities"]


def test_a_mesh_generator_that_dies_leaves_no_output(given):
    status, _, _ = ran(given, "compare", "given.toml", "--out", "out", "--json", "x.json", fault="os.abort()")
    assert status == -signal.SIGABRT
    assert left(given) == []


def test_a_mesh_generator_that_fails_is_a_solver_that_failed(given):
    status, _, err = ran(given, "compare", "given.toml", "--out", "out", fault="raise Exception('no room')")
    assert status == 3
    assert err == "given.toml: finite elements: the mesh generator cannot mesh one triangle: no room\n"
    assert left(given) == []


@pytest.mark.parametrize(
    "arguments",
    [
        ("compare", "given.toml", "--out", "out"),
        ("dossier", "given.toml", "--out", "out"),
        (*SWEEP[:-4], "--workers", "2"),
        ("verify", "--out", "out", "--workers", "2"),
    ],
    ids=lambda arguments: arguments[0],
)
def test_ctrl_c_stops_at_once(given, arguments):
    """In native code where it is one process; with workers busy where there are some."""
    alone = arguments[0] in ("compare", "dossier")
    with started(given, *arguments, fault=HANG if alone else "time.sleep(600)") as process:
        met = given.parent / "mesher" / "met"
        begun = time.monotonic()
        while not met.exists() and time.monotonic() - begun < 120:
            time.sleep(0.05)
        time.sleep(1.0)
        assert process.poll() is None
        pressed = time.monotonic()
        process.send_signal(signal.SIGINT)
        _, err = process.communicate(timeout=60)
    assert process.returncode == 130
    # a loaded machine takes its time; undisturbed it is one second, and an untouched product of matrices half a minute
    assert time.monotonic() - pressed < 10
    assert err.endswith("crosscheck: stopped\n")
    assert "Traceback" not in err
    assert [name for name in left(given) if "journal" not in name] == []


def test_output_folder_that_may_not_be_written(given, capsys, monkeypatch):
    """A superuser may write anywhere, so the refusal is the system's word, put in its mouth."""

    def refused(*_, **__):
        raise PermissionError(errno.EACCES, os.strerror(errno.EACCES))

    monkeypatch.setattr(crosscheck.whole_files.tempfile, "mkstemp", refused)
    assert main(["template", "channel", "--out", "new.toml"]) == 2
    assert capsys.readouterr().err == "new.toml: must be a file that can be written, got: Permission denied\n"
    assert main(["compare", "given.toml", "--accuracy", "1e-2", "--json", "x.json"]) == 2
    assert "x.json: must be a file that can be written, got: Permission denied" in capsys.readouterr().err


@pytest.mark.parametrize("piece", [0, 1])
def test_full_disk_leaves_the_old_file(given, capsys, monkeypatch, piece):
    """Full when the file is begun, or when it is put on disk."""
    whole = os.fsync

    def full(descriptor):
        if piece:
            os.write(descriptor, b"half")
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    (given / "x.json").write_text("old")
    monkeypatch.setattr(crosscheck.whole_files.os, "fsync", full)
    assert main(["compare", "given.toml", "--accuracy", "1e-2", "--json", "x.json"]) == 2
    monkeypatch.setattr(crosscheck.whole_files.os, "fsync", whole)
    assert "No space left on device" in capsys.readouterr().err
    assert left(given) == ["x.json"]
    assert (given / "x.json").read_text() == "old"


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="the system has no device that is always full")
def test_full_standard_output_is_told(given):
    with (
        open("/dev/full", "w") as full,
        subprocess.Popen(
            [sys.executable, "-m", "crosscheck", "template"], stdout=full, stderr=subprocess.PIPE, text=True,
            env={**os.environ, "PYTHONPATH": str(Path(__file__).parents[2])},
        ) as process,
    ):  # fmt: skip
        _, err = process.communicate(timeout=60)
    assert process.returncode != 0
    assert "No space left on device" in err
    assert "Traceback" not in err


def test_pictures_without_display_and_without_the_users_fonts(given, tmp_path):
    """The fonts that matter come with the drawing library."""
    nothing = {
        "DISPLAY": "",
        "WAYLAND_DISPLAY": "",
        "MPLBACKEND": "",
        "FONTCONFIG_PATH": str(tmp_path),
        "HOME": str(tmp_path),
    }
    status, _, err = ran(
        given, "draw", "given.toml", "--out", "x.svg", MPLCONFIGDIR=str(tmp_path / "mpl"), **nothing
    )
    assert (status, err) == (0, "")
    assert (given / "x.svg").read_bytes().startswith(b"<?xml")


def test_locale_with_decimal_comma(given):
    """Numbers come out with a point, whatever the locale; one that is not there is the plain one."""
    comma = {"LC_ALL": "de_DE.UTF-8", "LC_NUMERIC": "de_DE.UTF-8", "LANG": "de_DE.UTF-8"}
    command = ("compare", "given.toml", "--accuracy", "1e-2", "--json", "-")
    plain, german = (ran(given, *command, **each) for each in ({"LC_ALL": "C.UTF-8"}, comma))
    a, b = (json.loads(out)["quantities"] for _, out, _ in (plain, german))
    assert a == b


def test_native_code_that_minds_the_locale_is_given_the_plain_one(given, capsys):
    """Set in this process, as a program does that brings this one in."""
    import locale

    before = locale.setlocale(locale.LC_NUMERIC)
    try:
        found = next((n for n in ("de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8") if _set(locale, n)), None)
        if found is None:
            pytest.skip("no locale with a decimal comma is installed")
        assert main(["compare", "given.toml", "--accuracy", "1e-2"]) == 0
        assert "73.529" in capsys.readouterr().out
    finally:
        locale.setlocale(locale.LC_NUMERIC, before)


def _set(locale, name):
    try:
        return locale.setlocale(locale.LC_NUMERIC, name)
    except locale.Error:
        return None


def test_paths_and_titles_in_other_scripts(given, capsys):
    folder = given / "\u0431\u0430\u043b\u043a\u0438 \u6881 e\u0301"
    folder.mkdir()
    (folder / "\U0001f6e9.toml").write_text(
        f'title = "\u0411\u0430\u043b\u043a\u0430 \u6881"\n{CHANNEL}', encoding="utf-8"
    )
    assert (
        main(
            [
                "compare",
                str(folder / "\U0001f6e9.toml"),
                "--accuracy",
                "1e-2",
                "--json",
                str(folder / "\u00fc.json"),
            ]
        )
        == 0
    )
    assert "\u0411\u0430\u043b\u043a\u0430 \u6881" in capsys.readouterr().out
    assert json.loads((folder / "\u00fc.json").read_text(encoding="utf-8"))
    # a terminal of the last century
    status, _, err = ran(
        given,
        "compare",
        str(folder),
        "--accuracy",
        "1e-2",
        PYTHONIOENCODING="ascii:backslashreplace",
        LC_ALL="C",
    )
    assert status == 0, err


def test_two_runs_into_one_folder(given):
    """The last one's files stand, all of them: no mixture of two."""
    names = [f"{i}.txt" for i in range(20)]
    runs = [
        threading.Thread(
            target=write_folder, args=(given / "out", {name: f"run {k}".encode() * 1000 for name in names})
        )
        for k in range(6)
    ]
    for each in runs:
        each.start()
    for each in runs:
        each.join()
    assert len({(given / "out" / name).read_bytes() for name in names}) == 1
    assert len(left(given)) == len(names)


def test_two_sweeps_into_one_folder(given):
    """The second is refused: their members would be one table."""
    with started(given, *SWEEP, fault="time.sleep(600)") as first:
        journal = given / "out" / "journal.jsonl"
        while not (journal.exists() and journal.read_bytes()):
            assert first.poll() is None
            time.sleep(0.05)
        status, _, err = ran(given, *SWEEP)
        first.send_signal(signal.SIGINT)
        first.communicate(timeout=60)
    assert status == 2
    assert "in use by another run; wait for it to end" in err
