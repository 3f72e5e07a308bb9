"""The files that a result is written to."""

from __future__ import annotations

from opto_ckt.outputs.bom import bill_of_materials
from opto_ckt.outputs.bom_csv import bom_csv
from opto_ckt.outputs.bom_sheet import bom_sheet
from opto_ckt.outputs.result_json import result_json
from opto_ckt.outputs.schematic import schematic
from opto_ckt.outputs.spice import decks
from opto_ckt.result import Result


def every_file(result: Result) -> dict[str, str]:
    """Decks, bill of materials, schematic and JSON by file name."""
    stem = result.head.stem
    bom = bill_of_materials([result])
    return {
        **decks(result),
        f"{stem}.bom.txt": bom_sheet(bom),
        f"{stem}.bom.csv": bom_csv(bom),
        f"{stem}.svg": schematic(result),
        f"{stem}.json": result_json(result),
    }
