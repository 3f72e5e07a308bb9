"""``opto-ckt schematic``: the drawing."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


@click.command("schematic")
@options.design
@options.out("the drawing")
@options.force
@options.quiet
def command(design: str, out: str | None, force: bool, quiet: bool) -> int:
    """Size the circuit of DESIGN and print its schematic, with the values chosen, as SVG."""
    from opto_ckt.cli.designs import ended, sized
    from opto_ckt.outputs.schematic import schematic

    result = sized(design)
    drawing = schematic(result)
    if out is None:
        streams.put(drawing)
    else:
        from opto_ckt.cli.writing import write

        write(out, {f"{result.head.stem}.svg": drawing}, force=force, quiet=quiet)
    return ended([result], lambda text: streams.talk(text, quiet=quiet))
