"""``opto-ckt crosscheck``: prediction beside simulation."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


@click.command("crosscheck")
@options.design
@click.option(
    "--engine", type=click.Choice(["ngspice", "neospice"]), help="Simulator; ngspice where it is on the PATH."
)
@options.as_json
@options.quiet
def command(design: str, engine: str | None, as_json: bool, quiet: bool) -> int:
    """Size the circuit of DESIGN, run its decks in a simulator and print prediction beside simulation.

    Exit code 1 here means that the two do not agree within the bounds.
    """
    from opto_ckt.cli.designs import sized
    from opto_ckt.outputs.crosscheck import crosscheck, crosscheck_table, to_json
    from opto_ckt.outputs.simulators import ngspice_available

    result = sized(design)
    chosen = engine or ("ngspice" if ngspice_available() else "neospice")
    streams.progress(f"running {chosen} ...", quiet=quiet)
    rows = crosscheck(result, chosen)
    streams.progress("", quiet=quiet)
    streams.put(to_json(rows) if as_json else crosscheck_table(rows))
    return int(not all(row.ok for row in rows))
