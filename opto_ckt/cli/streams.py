"""The standard streams: UTF-8 everywhere, quiet ends of pipes, colour where it is wanted."""

from __future__ import annotations

import io
import os
import signal
import sys
import warnings
from typing import IO, Literal

import click

Colour = Literal["auto", "always", "never"]
LEAST_COLUMNS = 60  #: a narrower terminal is left to wrap by itself


def prepare() -> None:
    """Write UTF-8 with plain line feeds, end quietly when the reader of a pipe goes, hold back libraries' warnings."""
    if hasattr(signal, "SIGPIPE"):
        signal.signal(signal.SIGPIPE, signal.SIG_DFL)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(encoding="utf-8", errors="backslashreplace", newline="\n")
    if not sys.warnoptions:
        warnings.simplefilter("ignore")


def discard(stream: IO[str] | None) -> None:
    """Let what is left in a stream that cannot be written go nowhere."""
    if stream is not None:
        os.dup2(os.open(os.devnull, os.O_WRONLY), stream.fileno())


def put(text: str) -> None:
    """A result, to standard output as it is."""
    click.echo(text, nl=False, color=True)


def talk(text: str, *, quiet: bool = False) -> None:
    """A word to the user, to standard error."""
    if not quiet:
        click.echo(text, err=True)


def progress(text: str, *, quiet: bool = False) -> None:
    """What is being done, to a terminal only; the next talk takes its place."""
    if not quiet and sys.stderr is not None and sys.stderr.isatty():
        click.echo(f"\r\x1b[K{text}\r", nl=False, err=True)


def coloured(wanted: Colour) -> bool:
    """Whether to colour standard output: as told, else on a terminal unless NO_COLOR is set."""
    if wanted != "auto":
        return wanted == "always"
    return on_terminal() and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"


def columns() -> int | None:
    """Width of the terminal that standard output goes to; None where there is none, or one too narrow to wrap for."""
    if not on_terminal():
        return None
    try:
        wide = os.get_terminal_size(sys.stdout.fileno()).columns
    except OSError:
        return None
    return wide if wide >= LEAST_COLUMNS else None


def on_terminal() -> bool:
    """Whether standard output is a terminal."""
    return sys.stdout is not None and sys.stdout.isatty()
