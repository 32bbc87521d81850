"""Where the folder ``cases`` is: beside the packages in a clone, in the data folder of an installation."""

from __future__ import annotations

import sysconfig
from functools import cache
from pathlib import Path

from crosscheck.faults import CrosscheckError


@cache
def case_folder() -> Path:
    """Folder with section files, templates and reference values.

    Raises
    ------
    CrosscheckError
        Where the installation came without it.
    """
    beside = Path(__file__).resolve().parents[1] / "cases"
    installed = Path(sysconfig.get_path("data")) / "share" / "crosscheck" / "cases"
    for folder in (beside, installed):
        if (folder / "templates").is_dir():
            return folder
    raise CrosscheckError(
        f"{installed}: must hold the shipped cases, got nothing there; install crosscheck again"
    )
