"""How a command ends that the user stopped."""

from __future__ import annotations

from typing import Any

from typer.core import TyperGroup

# Files are written beside their place and take their names when they are complete.
_PLAIN = "Stopped. No file is left half written."


class Stopped(BaseException):
    """Ctrl-C, with one plain sentence on what is kept."""


class Commands(TyperGroup):
    """The commands; Ctrl-C in any of them ends as `Stopped`."""

    def invoke(self, ctx: Any) -> Any:
        """Run the command that was typed."""
        try:
            return super().invoke(ctx)
        except KeyboardInterrupt:
            raise Stopped(_PLAIN) from None
