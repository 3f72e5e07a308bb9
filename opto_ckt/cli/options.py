"""Arguments and options that several commands share."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import click

from opto_ckt.cli.suggestions import meant

Command = Callable[..., Any]

design = click.argument("design", metavar="DESIGN", type=click.Path(allow_dash=True))
quiet = click.option("-q", "--quiet", is_flag=True, help="Say nothing on standard error but errors.")
verbose = click.option("-v", "--verbose", is_flag=True, help="Tell more.")
as_json = click.option("--json", "as_json", is_flag=True, help="Print JSON, figures in SI base units.")
colour = click.option(
    "--color", "colour", type=click.Choice(["auto", "always", "never"]), default="auto",
    help="Colour the output; auto: on a terminal, unless NO_COLOR is set.",
)  # fmt: skip
force = click.option("--force", is_flag=True, help="Overwrite files that opto-ckt did not write.")


def out(what: str) -> Callable[[Command], Command]:
    """The folder that files are written into."""
    return click.option(
        "--out", metavar="DIR", type=click.Path(file_okay=False), help=f"Write {what} into this folder."
    )


def word(
    name: str, what: str, words: Callable[[], list[str]], metavar: str | None = None
) -> Callable[[Command], Command]:
    """An argument that is one of a few words, looked up when they are needed; a completing shell has them too."""

    def checked(ctx: click.Context, param: click.Parameter, value: str) -> str:
        known = words()
        if value not in known:
            hint = meant(value, known) or f"; there are {', '.join(known)}"
            raise click.BadParameter(f"there is no {what} '{value}'{hint}", ctx, param)
        return value

    def completed(ctx: click.Context, param: click.Parameter, incomplete: str) -> list[str]:
        return [known for known in words() if known.startswith(incomplete)]

    return click.argument(name, metavar=metavar, callback=checked, shell_complete=completed)
