"""``opto-ckt formula``: the symbolic model."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


def circuits() -> list[str]:
    """Names of the registry."""
    from opto_ckt.circuits import CIRCUITS

    return list(CIRCUITS)


@click.command("formula")
@options.word("circuit", "circuit", circuits)
@click.option("--latex", "as_latex", is_flag=True, help="Write LaTeX instead of plain text.")
@options.quiet
def command(circuit: str, as_latex: bool, quiet: bool) -> int:
    """Print transfer function, loop gain and every sizing relation of CIRCUIT with its source.

    The network functions are reduced to what matters at the values of the design that `opto-ckt start CIRCUIT` writes.
    """
    streams.progress("deriving ...", quiet=quiet)
    from opto_ckt.analyses.network.expansion import expand
    from opto_ckt.circuits import load
    from opto_ckt.cli.designs import read_starter
    from opto_ckt.design.nominal import nominal
    from opto_ckt.outputs.formula_page import formula_page

    chosen = load(circuit)
    topology, values = nominal(read_starter(chosen), chosen)
    title = f"{chosen.name}: {chosen.title}"
    page = formula_page(title, expand(topology), values, chosen.formulas, as_latex=as_latex)
    streams.progress("", quiet=quiet)
    streams.put(page)
    return 0
