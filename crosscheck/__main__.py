"""``python -m crosscheck``."""

from __future__ import annotations

import sys

from crosscheck.command_line import main

if __name__ == "__main__":
    sys.exit(main())
