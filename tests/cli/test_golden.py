"""What the worked designs print, kept word for word; numbers may move by a thousandth.

``python -m tests.cli.test_golden`` writes the files anew, after a change that is meant.
"""

from __future__ import annotations

import re
from itertools import zip_longest
from math import isclose
from pathlib import Path

import pytest

from tests.cli.process import ROOT, run

KEPT = Path(__file__).parent / "golden"
RELATIVE = 1e-3  #: a digit of three that rounds the other way is half of this
LAST_DIGIT = 1.01  #: of the digits printed
TOKEN = re.compile(r"[-+]?\d+(?:\.\d+)?(?:e[-+]?\d+)?|[^\W\d]+|\S")
NUMBER = re.compile(r"[-+]?\d+(?:\.\d+)?(?:e[-+]?\d+)?")

TIA, LASER = (str(ROOT / "designs" / f"{name}.toml") for name in ("tia", "laser-current"))
LINES = {
    "tia.verbose.txt": ("size", TIA, "-v"),
    "tia.json": ("size", TIA, "--json"),
    "tia.formula.txt": ("formula", "tia"),
    "laser-current.txt": ("size", LASER),
    "both.bom.txt": ("bom", TIA, LASER, "--boards", "10"),
    "both.bom.csv": ("bom", TIA, LASER, "--boards", "10", "--csv"),
}


def tokens(text: str) -> list[str]:
    """Words, numbers and signs; the digest of the files apart, which every comment in them changes."""
    return TOKEN.findall(re.sub(r"sha256:[0-9a-f]{64}", "sha256", text))


def same(found: str, kept: str) -> bool:
    """Equal words; numbers equal within a thousandth, or one in the last digit printed."""
    if found == kept:
        return True
    if not (NUMBER.fullmatch(found) and NUMBER.fullmatch(kept)):
        return False
    mantissa = kept.split("e")[0]
    step = 10.0 ** -len(mantissa.partition(".")[2]) * (10.0 ** int(kept.split("e")[1]) if "e" in kept else 1.0)
    return isclose(float(found), float(kept), rel_tol=RELATIVE, abs_tol=LAST_DIGIT * step)


@pytest.mark.parametrize("name", LINES)
def test_output_is_as_it_was(name: str) -> None:
    ended = run(*LINES[name])
    assert ended.returncode == 0, ended.stderr.decode()
    kept = (KEPT / name).read_text(encoding="utf-8")
    pairs = zip_longest(tokens(ended.stdout.decode()), tokens(kept), fillvalue="")
    differing = [(found, before) for found, before in pairs if not same(found, before)]
    assert not differing[:5], "python -m tests.cli.test_golden keeps what is printed now"


def test_the_comparison_sees_words_and_numbers() -> None:
    assert same("8.49", "8.48")
    assert same("1.0005e6", "1e6")
    assert not same("8.49", "8.39")
    assert not same("MHz", "kHz")
    assert not same("met", "8")


if __name__ == "__main__":
    KEPT.mkdir(exist_ok=True)
    for kept_name, line in LINES.items():
        (KEPT / kept_name).write_bytes(run(*line).stdout)
