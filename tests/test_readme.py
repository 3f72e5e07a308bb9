"""The README says what is: its example is what the program prints, its table of circuits is the registry.

``python -m tests.test_readme`` writes example and table anew, after a change that is meant.
"""

from __future__ import annotations

import re
from itertools import zip_longest

from opto_ckt.circuits import CIRCUITS, load
from tests.cli.process import ROOT, run
from tests.cli.test_golden import same, tokens

README = ROOT / "README.md"
DESIGN = ("size", "designs/tia.toml")
BLOCK = re.compile(r"(<!-- (example|circuits) -->\n)(.*?)(<!-- end -->)", re.DOTALL)


def blocks() -> dict[str, str]:
    """Text between each pair of marks."""
    return {match[2]: match[3] for match in BLOCK.finditer(README.read_text(encoding="utf-8"))}


def written() -> dict[str, str]:
    """What ought to stand there."""
    printed = run(*DESIGN, folder=ROOT).stdout.decode()
    rows = "".join(f"| `{name}` | {load(name).title} |\n" for name in CIRCUITS)
    return {"example": f"```text\n{printed}```\n", "circuits": f"| circuit | what it is |\n|---|---|\n{rows}"}


def test_the_example_is_what_the_program_prints() -> None:
    pairs = zip_longest(tokens(written()["example"]), tokens(blocks()["example"]), fillvalue="")
    differing = [(found, kept) for found, kept in pairs if not same(found, kept)]
    assert not differing[:5], "python -m tests.test_readme keeps what is printed now"


def test_the_table_of_circuits_is_the_registry() -> None:
    assert blocks()["circuits"] == written()["circuits"]


def test_the_picture_is_what_the_program_draws() -> None:
    drawn = run("schematic", "designs/tia.toml", folder=ROOT).stdout.decode()
    assert (ROOT / "designs" / "tia.svg").read_text(encoding="utf-8") == drawn


if __name__ == "__main__":
    fresh = written()
    text = BLOCK.sub(lambda match: match[1] + fresh[match[2]] + match[4], README.read_text(encoding="utf-8"))
    README.write_text(text, encoding="utf-8")
    drawn = run("schematic", "designs/tia.toml", folder=ROOT).stdout.decode()
    (ROOT / "designs" / "tia.svg").write_text(drawn, encoding="utf-8")
