"""``opto-ckt size``: the main job."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


@click.command("size")
@options.design
@options.out("decks, bill of materials, schematic and JSON")
@options.force
@options.as_json
@options.verbose
@options.quiet
@options.colour
def command(
    design: str, out: str | None, force: bool, as_json: bool, verbose: bool, quiet: bool, colour: streams.Colour
) -> int:
    """Size the circuit of DESIGN, check it at its corners, print what was found."""
    from opto_ckt.cli.designs import sized
    from opto_ckt.outputs.report import page
    from opto_ckt.outputs.result_json import result_json

    result = sized(design, compared=verbose)
    if out is not None:
        from opto_ckt.cli.files import every_file
        from opto_ckt.cli.writing import write

        write(out, every_file(result), force=force, quiet=quiet)
    if as_json:
        streams.put(result_json(result))
    else:
        streams.put(page(result, verbose=verbose, colour=streams.coloured(colour), columns=streams.columns()))
    return int(result.verdict == "missed")
