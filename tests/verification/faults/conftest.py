"""Makes the catalogue and the machinery of tests/mutation importable for the tests of this folder."""

from __future__ import annotations

import sys
from pathlib import Path

sys.path[:0] = [str(Path(__file__).parent), str(Path(__file__).parents[2] / "mutation")]
