"""`python -m panelview`."""

from __future__ import annotations

import sys

from panelview.command import main

if __name__ == "__main__":
    sys.exit(main())
