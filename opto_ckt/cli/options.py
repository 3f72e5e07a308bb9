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
    return click.option("--out", metavar="DIR", type=click.Path(file_okay=False), help=f"Write {what} into this folder.")


class Word(click.ParamType):
    """One of a few words, which are looked up when they are needed; the completion of a shell knows them too."""

    def __init__(self, what: str, words: Callable[[], list[str]]) -> None:
        self.name = what
        self.words = words

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> str:
        """The word, or a refusal that names those allowed."""
        words = self.words()
        if value not in words:
            hint = meant(str(value), words) or f"; there are {', '.join(words)}"
            self.fail(f"there is no {self.name} '{value}'{hint}", param, ctx)
        return str(value)

    def shell_complete(self, ctx: click.Context, param: click.Parameter, incomplete: str) -> list[Any]:
        """The words that begin like what was typed."""
        from click.shell_completion import CompletionItem  # needed by a completing shell alone

        return [CompletionItem(word) for word in self.words() if word.startswith(incomplete)]
