"""`python -m heataudit`."""

from __future__ import annotations

import sys

from heataudit.cli import main

if __name__ == "__main__":
    sys.exit(main())
