"""The command line."""

from __future__ import annotations

from rheo.cli.app import main

__all__ = ["main"]
