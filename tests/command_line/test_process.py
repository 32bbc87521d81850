"""The program as a process: help without heavy imports, pipes, encodings, module and version."""

from __future__ import annotations

import os
import subprocess
import sys

HEAVY = ("numpy", "scipy", "gmsh", "matplotlib", "rich", "shapely", "pydantic", "beam_theory", "fe_models")


def process(*arguments, **environment):
    """Run ``python -m crosscheck`` in a process of its own."""
    return subprocess.run(
        [sys.executable, "-m", "crosscheck", *map(str, arguments)],
        capture_output=True,
        env={**os.environ, **environment},
        timeout=120,
        check=False,
    )


def test_help_offers_what_exists():
    ran = process("--help")
    assert ran.returncode == 0
    text = ran.stdout.decode()
    assert "compare" in text
    assert "draw" in text
    assert "exit status" in text
    assert "not approval" in text


def test_help_loads_nothing_heavy():
    code = (
        "import sys\nfrom crosscheck.command_line import main\n"
        f"main(['compare', '--help'])\nprint([m for m in {HEAVY!r} if m in sys.modules])"
    )
    ran = subprocess.run([sys.executable, "-c", code], capture_output=True, timeout=60, check=True)
    assert ran.stdout.decode().splitlines()[-1] == "[]"


def test_no_command_shows_help_and_is_bad_input():
    ran = process()
    assert ran.returncode == 2
    assert b"usage: crosscheck" in ran.stderr


def test_unknown_command_and_option_are_bad_input(channel):
    for arguments in (("compass", channel), ("compare", channel, "--acc", "1e-5")):
        ran = process(*arguments)
        assert ran.returncode == 2
        assert b"Traceback" not in ran.stderr


def test_version():
    assert process("--version").stdout.decode().startswith("crosscheck ")


def test_pipe_without_colour_and_without_unicode(channel):
    ran = process("compare", channel, COLUMNS="120", PYTHONIOENCODING="ascii", NO_COLOR="1")
    assert ran.stderr == b""
    assert b"\x1b" not in ran.stdout
    assert b"+-" in ran.stdout
    assert max(map(len, ran.stdout.splitlines())) <= 120


def test_reader_of_the_pipe_that_goes_away(channel):
    with subprocess.Popen(
        [sys.executable, "-m", "crosscheck", "compare", str(channel), "--json", "-"],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    ) as process_:
        assert process_.stdout is not None
        process_.stdout.close()
        assert process_.stderr is not None
        errors = process_.stderr.read()
        process_.wait(timeout=60)
    assert b"Traceback" not in errors
    assert b"BrokenPipe" not in errors


def test_public_names_are_there():
    import crosscheck

    for name in crosscheck.__all__:
        assert getattr(crosscheck, name) is not None
    assert set(crosscheck.__all__) <= set(dir(crosscheck))
