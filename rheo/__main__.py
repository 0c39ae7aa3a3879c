"""Start the command line with ``python -m rheo``."""

from __future__ import annotations

from rheo.cli import main

if __name__ == "__main__":
    main()
