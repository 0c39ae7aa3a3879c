"""The command `rheo` and how it ends."""

from __future__ import annotations

import os
import sys
from typing import Annotated

import typer

from rheo.cli.batch import batch
from rheo.cli.convert import convert
from rheo.cli.fit import fit
from rheo.cli.models import models
from rheo.cli.open_page import open_page
from rheo.cli.pipe import pipe
from rheo.cli.run import run
from rheo.cli.size import size
from rheo.cli.stopped import Commands, Stopped
from rheo.errors import InputError

app = typer.Typer(
    name="rheo",
    cls=Commands,
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
    context_settings={"help_option_names": ["-h", "--help"]},
    help="From viscometer readings of a thick product to a transfer line to sign.",
    epilog="'rheo COMMAND --help' explains each command.",
)
app.command("run")(run)
app.command("fit")(fit)
app.command("pipe")(pipe)
app.command("convert")(convert)
app.command("size")(size)
app.command("batch")(batch)
app.command("models")(models)
app.command("open")(open_page)


def _version(wanted: bool) -> None:
    if wanted:
        from rheo import __version__

        typer.echo(f"rheo {__version__}")
        raise typer.Exit


@app.callback()
def _start(
    _version_wanted: Annotated[
        bool,
        typer.Option("--version", callback=_version, is_eager=True, help="Print the version."),
    ] = False,
) -> None:
    """Nothing to do before a command."""


def main() -> None:
    """Run the command line.

    Ends with 0 when done; 1 with one plain sentence on stderr when what the user gave is wrong or
    the result cannot be written; 2 for wrong usage; 130 after Ctrl-C, with one plain sentence.
    """
    for stream in (sys.stdout, sys.stderr):
        # A terminal that lacks a Greek letter shows a question mark; the work is not lost for it.
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")
    try:
        app(prog_name="rheo")
    except InputError as error:
        _end(str(error), 1)
    except BrokenPipeError:
        _end("", 1)
    except OSError as error:
        named = f"{error.filename}: " if error.filename else ""
        _end(f"{named}{error.strerror or error}", 1)
    except Stopped as stopped:
        # The terminal shows ^C on the same line.
        sys.stderr.write(f"\n{stopped}\n" if sys.stderr.isatty() else f"{stopped}\n")
        _end("", 130)
    except KeyboardInterrupt:
        _end("stopped", 130)


def _end(sentence: str, status: int) -> None:
    if sentence:
        sys.stderr.write(f"rheo: {' '.join(sentence.split())}\n")
    # What is still to be written may have nowhere to go; the interpreter must not complain of it.
    _to_nowhere()
    sys.exit(status)


def _to_nowhere() -> None:
    try:
        sys.stdout.flush()
    except OSError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
