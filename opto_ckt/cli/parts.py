"""``opto-ckt parts``: what lies in part files."""

from __future__ import annotations

import click

from opto_ckt.cli import options, streams


@click.command("parts")
@click.argument("files", metavar="FILE...", nargs=-1, required=True, type=click.Path())
@options.verbose
def command(files: tuple[str, ...], verbose: bool) -> int:
    """List the parts of part files with their main figures; with -v every figure."""
    from opto_ckt.design.reading import read_part_file
    from opto_ckt.outputs.lists import parts_list

    for number, file in enumerate(files):
        streams.put("\n" * bool(number) + parts_list(file, read_part_file(file), verbose=verbose))
    return 0
