"""``opto-ckt completion``: the script for a shell."""

from __future__ import annotations

import click
from click.shell_completion import get_completion_class

from opto_ckt.cli import streams

VARIABLE = "_OPTO_CKT_COMPLETE"
SHELLS = ("bash", "zsh", "fish")


@click.command("completion")
@click.argument("shell", type=click.Choice(SHELLS))
@click.pass_context
def command(ctx: click.Context, shell: str) -> int:
    """Print a script that makes SHELL complete commands, options, circuits and files of opto-ckt.

    \b
    bash:  opto-ckt completion bash >> ~/.bashrc
    zsh:   opto-ckt completion zsh >> ~/.zshrc
    fish:  opto-ckt completion fish > ~/.config/fish/completions/opto-ckt.fish
    """
    kind = get_completion_class(shell)
    if kind is None:
        raise click.BadParameter(f"{shell} cannot be completed by this version of click")
    program = ctx.find_root().command
    streams.put(kind(program, {}, "opto-ckt", VARIABLE).source() + "\n")
    return 0
