"""What the solver of finite elements gave, given again in a forked process where no line of it is changed."""

from __future__ import annotations

import pickle
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).parents[2]))

import fe_models
from fe_models import solution


class Memory:
    """Keeps every solution from now on; gives it again instead of solving only while ``replay`` is set."""

    def __init__(self) -> None:
        self.kept: dict[tuple[str, bytes], Any] = {}
        self.replay = False
        for name in ("solve", "solve_solid"):
            setattr(fe_models, name, self._kept(name))

    def _kept(self, name: str) -> Callable[..., Any]:
        def solved(*arguments: Any, **named: Any) -> Any:
            # whom it tells of its progress has no part in what comes of it
            told = [value for value in (*arguments, *named.values()) if not callable(value)]
            key = (name, pickle.dumps(told))
            if self.replay and key in self.kept:
                return self.kept[key]
            self.kept[key] = getattr(solution, name)(*arguments, **named)
            return self.kept[key]

        return solved
