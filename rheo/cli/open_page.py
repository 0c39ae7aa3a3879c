"""`rheo open`: the Streamlit page."""

from __future__ import annotations

from typing import Annotated

import typer

from rheo.cli.stopped import Stopped
from rheo.errors import InputError


def open_page(
    port: Annotated[
        int, typer.Option("--port", min=1, max=65535, help="Port on this machine.")
    ] = 8501,
    browser: Annotated[
        bool, typer.Option("--browser/--no-browser", help="Open a browser window.")
    ] = True,
) -> None:
    """Open the page in a browser; it runs on this machine only. Ctrl-C ends it."""
    import importlib.util
    import sys
    from pathlib import Path

    found = importlib.util.find_spec("ui")
    folders = list(found.submodule_search_locations or []) if found else []
    page = next((Path(one) / "app.py" for one in folders if (Path(one) / "app.py").exists()), None)
    if page is None:
        raise InputError(
            "the page is not installed; install rheo with its folder 'ui'", "ui/app.py"
        )
    from streamlit.web import cli

    # In this process, so that no server is left behind when the command ends.
    headless = "false" if browser else "true"
    sys.argv = [
        *("streamlit", "run", str(page)),
        *("--server.port", str(port), "--server.headless", headless),
    ]
    try:
        status = cli.main()
    except SystemExit as ended:
        status = ended.code
    if status:
        sys.exit(status)
    # The server ends with 0 only when it is told to: it takes Ctrl-C by itself.
    raise Stopped("Stopped. The page is closed; cases that were saved are kept.")
