"""What goes wrong, as one sentence: what the user can put right, and what nobody foresaw."""

from __future__ import annotations

import sys
import traceback
from types import TracebackType

from rheo.errors import InputError

UNEXPECTED = (
    "Something went wrong here that you did not cause. Your case is kept: undo your last change, "
    "or save the case and reload the page. The terminal that runs the page shows the details."
)


class Catch:
    """Keeps what goes wrong inside a ``with`` as `problem`; the unforeseen goes to the terminal.

    What ends a run of the script by intent (a rerun, a stop) is no `Exception` and passes through.
    """

    problem: InputError | None = None

    def __enter__(self) -> Catch:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        where: TracebackType | None,
    ) -> bool:
        """Keep the problem; say whether it has been dealt with."""
        if isinstance(error, InputError):
            self.problem = error
        elif isinstance(error, Exception):
            traceback.print_exception(kind, error, where, file=sys.stderr)
            self.problem = InputError(UNEXPECTED)
        return self.problem is not None
