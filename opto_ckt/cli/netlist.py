"""``opto-ckt netlist``: decks for a simulator."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


@click.command("netlist")
@options.design
@click.option("--analysis", metavar="NAME", help="Print this deck alone: ac, noise, step, loop or pulse.")
@options.out("each deck as a file")
@options.force
@options.quiet
def command(design: str, analysis: str | None, out: str | None, force: bool, quiet: bool) -> int:
    """Size the circuit of DESIGN and print its SPICE decks, one analysis a deck, each ended by `.end`."""
    from opto_ckt.cli.designs import ended, sized
    from opto_ckt.outputs.spice import decks

    result = sized(design)
    found = decks(result)
    if analysis is not None:
        names = {name.removeprefix(f"{result.head.stem}.").removesuffix(".cir"): name for name in found}
        if analysis not in names:
            raise click.BadParameter(
                f"there is no deck '{analysis}'; there are {', '.join(names)}", param_hint="--analysis"
            )
        found = {names[analysis]: found[names[analysis]]}
    if out is None:
        streams.put("".join(found.values()))
    else:
        from opto_ckt.cli.writing import write

        write(out, found, force=force, quiet=quiet)
    return ended([result], lambda text: streams.talk(text, quiet=quiet))
