"""Makes plain_fe and the section builders of both sides importable for the tests of this folder."""

from __future__ import annotations

import sys
from pathlib import Path

TESTS = Path(__file__).parents[1]
sys.path[:0] = [str(Path(__file__).parent), str(TESTS / "fe"), str(TESTS / "theory")]
