from __future__ import annotations

from pathlib import Path

import pytest

from opto_ckt.design import files
from opto_ckt.design.files import LARGEST
from opto_ckt.errors import InputError
from tests.design.designs import RECEIVER, problems, read_file


@pytest.mark.parametrize(
    ("content", "told"),
    [
        (b"", "is empty"),
        (b" \n\n", "is empty"),
        (b"\xef\xbb\xbfcircuit = 'tia'\n", "design.toml:1: begins with a byte-order mark"),
        (b"title = 'x'\n\xff\n", "design.toml:2: is not UTF-8 text"),
        (b"a = 1\nb = = 2\n", "design.toml:2: is not valid TOML: "),
        (b"a = [1,\n", "design.toml: is not valid TOML: "),
        (b"a = 1\na = 2\n", "design.toml:2: is not valid TOML: cannot overwrite a value"),
        (b"a = " + b"9" * 5000 + b"\n", "is not valid TOML"),
        (b"a = " + b"[" * 9000 + b"]" * 9000 + b"\n", "is nested too deep"),
        (b"#" * 10_000_000, f"larger than {LARGEST // 1000} kB"),
        (b"a = 1\x00\n", "design.toml:1: is not valid TOML"),
    ],
    ids=["empty", "blank", "mark", "bytes", "syntax", "open", "double", "number", "deep", "large", "zero"],
)
def test_file_that_is_no_design(tmp_path: Path, content: bytes, told: str, monkeypatch: pytest.MonkeyPatch):
    monkeypatch.chdir(tmp_path)
    Path("design.toml").write_bytes(content)
    with pytest.raises(InputError) as caught:
        read_file(Path("design.toml"))
    assert str(caught.value).startswith("design.toml")
    assert told in str(caught.value)


def test_directory_and_missing_file(tmp_path: Path):
    with pytest.raises(InputError, match="is a directory"):
        read_file(tmp_path)
    with pytest.raises(InputError, match="there is no such file"):
        read_file(tmp_path / "gone.toml")


def test_file_without_permission(tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    def refuse(path: str, mode: str) -> None:
        raise PermissionError(13, "Permission denied", path)

    monkeypatch.setattr(files, "open", refuse, raising=False)
    with pytest.raises(InputError, match="no permission"):
        read_file(tmp_path / "tia.toml")


def test_a_number_too_large_to_print_is_told_as_such():
    (found,) = problems(RECEIVER.replace('"400 MHz"', "0x" + "f" * 5000))
    assert "amplifier.gain_bandwidth: expected a figure, such as '230 MHz', got a huge number" in found
