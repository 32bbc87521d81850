"""Puts this folder's own modules on the path: the tests are imported one by one."""

from __future__ import annotations

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent))
