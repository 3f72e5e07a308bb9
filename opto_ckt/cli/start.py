"""``opto-ckt start``: a file to begin from."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


def words() -> list[str]:
    """Circuits, then kinds of part."""
    from opto_ckt.circuits import CIRCUITS
    from opto_ckt.parts.sections import SECTIONS

    return [*CIRCUITS, *SECTIONS]


@click.command("start")
@options.word("what", "circuit or part record", words, metavar="CIRCUIT|RECORD")
def command(what: str) -> int:
    """Print a commented design file of CIRCUIT, ready to be sized, or a part RECORD to fill from a data sheet."""
    from opto_ckt.circuits import CIRCUITS, load
    from opto_ckt.outputs.starter import design_file, part_file
    from opto_ckt.parts.sections import records_of

    if what in CIRCUITS:
        circuit = load(what)
        streams.put(design_file(circuit.starter, circuit.request))
    else:
        streams.put(part_file(records_of(what)))
    return 0
