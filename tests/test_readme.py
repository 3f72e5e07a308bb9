"""README and DEVELOPERS say what is: the example is what the program prints, the tables are registry and figures.

``python -m tests.test_readme`` writes example and tables anew, after a change that is meant.
"""

from __future__ import annotations

import re
from itertools import zip_longest

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.figures import FIGURES
from tests.cli.process import ROOT, run
from tests.cli.test_golden import same, tokens

README, DEVELOPERS = ROOT / "README.md", ROOT / "DEVELOPERS.md"
DESIGN = ("size", "designs/tia.toml")
BLOCK = re.compile(r"(<!-- (example|circuits|glossary) -->\n)(.*?)(<!-- end -->)", re.DOTALL)


def blocks() -> dict[str, str]:
    """Text between each pair of marks."""
    texts = (path.read_text(encoding="utf-8") for path in (README, DEVELOPERS))
    return {match[2]: match[3] for text in texts for match in BLOCK.finditer(text)}


def escaped(text: str) -> str:
    """Text that does not end a cell of a table."""
    return text.replace("|", "\\|")


def written() -> dict[str, str]:
    """What ought to stand there."""
    printed = run(*DESIGN, folder=ROOT).stdout.decode()
    rows = "".join(f"| `{name}` | {load(name).title} |\n" for name in CIRCUITS)
    figures = "".join(f"| `{each.name}` | {each.unit} | {escaped(each.convention)} |\n" for each in FIGURES.values())
    return {
        "example": f"```text\n{printed}```\n",
        "circuits": f"| circuit | what it is |\n|---|---|\n{rows}",
        "glossary": f"| figure | unit | convention |\n|---|---|---|\n{figures}",
    }


def test_the_example_is_what_the_program_prints() -> None:
    pairs = zip_longest(tokens(written()["example"]), tokens(blocks()["example"]), fillvalue="")
    differing = [(found, kept) for found, kept in pairs if not same(found, kept)]
    assert not differing[:5], "python -m tests.test_readme keeps what is printed now"


def test_the_table_of_circuits_is_the_registry() -> None:
    assert blocks()["circuits"] == written()["circuits"]


def test_the_glossary_is_the_table_of_figures() -> None:
    assert blocks()["glossary"] == written()["glossary"]


def test_the_picture_is_what_the_program_draws() -> None:
    drawn = run("schematic", "designs/tia.toml", folder=ROOT).stdout.decode()
    assert (ROOT / "designs" / "tia.svg").read_text(encoding="utf-8") == drawn


if __name__ == "__main__":
    fresh = written()
    for path in (README, DEVELOPERS):
        text = path.read_text(encoding="utf-8")
        path.write_text(BLOCK.sub(lambda match: match[1] + fresh[match[2]] + match[4], text), encoding="utf-8")
    drawn = run("schematic", "designs/tia.toml", folder=ROOT).stdout.decode()
    (ROOT / "designs" / "tia.svg").write_text(drawn, encoding="utf-8")
