"""Texts written into one folder: all of them or none, and never over somebody else's file."""

from __future__ import annotations

import os
from collections.abc import Iterable, Mapping
from pathlib import Path
from tempfile import TemporaryDirectory

from opto_ckt.errors import RefusedError

MARKER = "opto-ckt"  #: stands at the beginning of every file that is written
_BEGINNING = 1024  #: bytes in which the marker must stand


def write_files(folder: str | os.PathLike[str], files: Mapping[str, str], *, force: bool = False) -> tuple[Path, ...]:
    """Write texts by file name into a folder, which is made if it is missing; what was written.

    Each file appears whole: it is written beside and then put in its place. Nothing is written where one file would be
    refused.

    Raises
    ------
    RefusedError : a name leads out of the folder; a file of that name was not written by this tool and ``force`` is
        not set; a folder of that name exists; the system does not let it be written.
    ValueError : a text does not carry the marker, so that it could not be known again.
    """
    where = Path(folder)
    paths = {name: where / _plain(name) for name in files}
    for name, text in files.items():
        if MARKER.encode() not in text.encode()[:_BEGINNING]:
            raise ValueError(f"{name} does not carry the marker '{MARKER}'")
    try:
        _check(paths.values(), force=force)
        where.mkdir(parents=True, exist_ok=True)
        with TemporaryDirectory(prefix=".opto-ckt-", dir=where) as beside:
            for name, text in files.items():
                with open(Path(beside, name), "x", encoding="utf-8", newline="\n") as file:
                    file.write(text)
            for name, path in paths.items():
                os.replace(Path(beside, name), path)
    except OSError as error:
        raise RefusedError(f"{where}: cannot be written: {error.strerror or error}") from error
    return tuple(paths.values())


def _plain(name: str) -> str:
    if name in {"", ".", ".."} or any(letter in name for letter in "/\\:\0\n\r"):
        raise RefusedError(f"{name!r} is no file name; expected one without '/', '\\' and ':'")
    return name


def _check(paths: Iterable[Path], *, force: bool) -> None:
    present = [path for path in paths if os.path.lexists(path)]
    folders = [path.name for path in present if path.is_dir() and not path.is_symlink()]
    if folders:
        raise RefusedError(f"{present[0].parent}: not written, since {', '.join(folders)} is a folder there")
    foreign = [path for path in present if not (force or _ours(path))]
    if foreign:
        names = ", ".join(path.name for path in foreign)
        raise RefusedError(
            f"{foreign[0].parent}: not written, since {names} already there did not come from {MARKER}; "
            "give another folder, or --force to overwrite"
        )


def _ours(path: Path) -> bool:
    """Whether a file carries the marker; a link does not, wherever it leads."""
    if path.is_symlink() or not path.is_file():
        return False
    with open(path, "rb") as file:
        return MARKER.encode() in file.read(_BEGINNING)
