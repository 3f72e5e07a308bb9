"""``opto-ckt circuits``: what there is."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


@click.command("circuits")
@options.verbose
def command(verbose: bool) -> int:
    """List the circuits; with -v also what each figure means and which circuits offer it."""
    from opto_ckt.circuits import CIRCUITS, load
    from opto_ckt.outputs.lists import circuits_list, figures_table

    circuits = [load(name) for name in CIRCUITS]
    streams.put(circuits_list({circuit.name: circuit.title for circuit in circuits}))
    if verbose:
        streams.put("\n" + figures_table({circuit.name: circuit.offers for circuit in circuits}))
    return 0
