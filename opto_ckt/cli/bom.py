"""``opto-ckt bom``: what to buy."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams

SEPARATORS = {",": ",", ";": ";", "tab": "\t"}


@click.command("bom")
@click.argument("designs", metavar="DESIGN...", nargs=-1, required=True, type=click.Path(allow_dash=True))
@click.option("--boards", type=click.IntRange(min=1), default=1, show_default=True, help="Boards of each design.")
@click.option("--csv", "as_csv", is_flag=True, help="Print CSV instead of the sheet.")
@click.option(
    "--separator", type=click.Choice(list(SEPARATORS)), default=",", show_default=True, help="Between cells of the CSV."
)
@click.option("--bom-mark", is_flag=True, help="Begin the CSV with a byte-order mark, as some spreadsheets want.")
@options.out("sheet and CSV")
@options.force
@options.quiet
def command(
    designs: tuple[str, ...],
    boards: int,
    as_csv: bool,
    separator: str,
    bom_mark: bool,
    out: str | None,
    force: bool,
    quiet: bool,
) -> int:
    """Size each DESIGN and print one bill of materials of all; equal parts share a line."""
    from opto_ckt.cli.designs import ended, sized
    from opto_ckt.outputs.bom import bill_of_materials
    from opto_ckt.outputs.bom_csv import bom_csv
    from opto_ckt.outputs.bom_sheet import bom_sheet

    if designs.count("-") > 1:
        raise click.BadParameter("standard input can be read only once", param_hint="DESIGN")
    results = [sized(design) for design in designs]
    bom = bill_of_materials(results, boards)
    sheet, cells = bom_sheet(bom), bom_csv(bom, separator=SEPARATORS[separator], byte_order_mark=bom_mark)
    if out is None:
        streams.put(cells if as_csv else sheet)
    else:
        from opto_ckt.cli.writing import write

        stem = "-".join(dict.fromkeys(result.head.stem for result in results))
        write(out, {f"{stem}.bom.txt": sheet, f"{stem}.bom.csv": cells}, force=force, quiet=quiet)
    return ended(results, lambda text: streams.talk(text, quiet=quiet))
