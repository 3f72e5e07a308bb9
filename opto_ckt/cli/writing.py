"""Files written into a folder, and said so."""

from __future__ import annotations

from collections.abc import Mapping

from opto_ckt.cli.streams import talk
from opto_ckt.outputs.files import write_files


def write(folder: str, texts: Mapping[str, str], *, force: bool, quiet: bool) -> None:
    """Write them all or none, and say which."""
    write_files(folder, texts, force=force)
    talk(f"wrote {', '.join(texts)} into {folder}", quiet=quiet)
