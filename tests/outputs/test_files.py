from __future__ import annotations

import os
from pathlib import Path

import pytest

from opto_ckt.errors import OptoCktError, RefusedError
from opto_ckt.outputs.files import write_files

OURS = "* written by opto-ckt\nµ\n"


def test_files_are_written_into_a_folder_that_is_made(tmp_path: Path) -> None:
    folder = tmp_path / "new" / "out"
    written = write_files(folder, {"a.cir": OURS, "b.cir": OURS + "b\n"})
    assert written == (folder / "a.cir", folder / "b.cir")
    assert (folder / "a.cir").read_bytes() == OURS.encode()
    assert sorted(os.listdir(folder)) == ["a.cir", "b.cir"]


def test_own_files_are_replaced(tmp_path: Path) -> None:
    write_files(tmp_path, {"a.cir": OURS})
    write_files(tmp_path, {"a.cir": OURS + "newer\n"})
    assert (tmp_path / "a.cir").read_text(encoding="utf-8").endswith("newer\n")


def test_foreign_file_stays_and_nothing_else_is_written(tmp_path: Path) -> None:
    (tmp_path / "b.cir").write_text("mine", encoding="utf-8")
    with pytest.raises(RefusedError, match=r"b\.cir already there did not come from opto-ckt; .*--force") as caught:
        write_files(tmp_path, {"a.cir": OURS, "b.cir": OURS})
    assert isinstance(caught.value, OptoCktError)
    assert caught.value.exit_code == 2
    assert os.listdir(tmp_path) == ["b.cir"]
    assert (tmp_path / "b.cir").read_text(encoding="utf-8") == "mine"


def test_force_overwrites_a_foreign_file(tmp_path: Path) -> None:
    (tmp_path / "b.cir").write_text("mine", encoding="utf-8")
    write_files(tmp_path, {"b.cir": OURS}, force=True)
    assert (tmp_path / "b.cir").read_text(encoding="utf-8") == OURS


def test_marker_counts_only_at_the_beginning(tmp_path: Path) -> None:
    (tmp_path / "b.cir").write_text("x" * 1024 + "opto-ckt", encoding="utf-8")
    with pytest.raises(RefusedError):
        write_files(tmp_path, {"b.cir": OURS})


def test_link_is_not_followed(tmp_path: Path) -> None:
    elsewhere = tmp_path / "elsewhere"
    elsewhere.write_text(OURS, encoding="utf-8")
    folder = tmp_path / "out"
    folder.mkdir()
    (folder / "a.cir").symlink_to(elsewhere)
    with pytest.raises(RefusedError):
        write_files(folder, {"a.cir": OURS + "newer\n"})
    write_files(folder, {"a.cir": OURS + "newer\n"}, force=True)
    assert elsewhere.read_text(encoding="utf-8") == OURS
    assert not (folder / "a.cir").is_symlink()


@pytest.mark.parametrize("force", [False, True])
def test_folder_in_the_place_of_a_file_is_refused(tmp_path: Path, force: bool) -> None:
    (tmp_path / "b.cir").mkdir()
    with pytest.raises(RefusedError, match=r"b\.cir is a folder"):
        write_files(tmp_path, {"a.cir": OURS, "b.cir": OURS}, force=force)
    assert os.listdir(tmp_path) == ["b.cir"]


@pytest.mark.parametrize("name", ["../a.cir", "/a.cir", "sub/a.cir", "..", "", "a\\b", "c:a", "a\nb"])
def test_names_that_lead_elsewhere_are_refused(tmp_path: Path, name: str) -> None:
    with pytest.raises(RefusedError, match="is no file name"):
        write_files(tmp_path / "out", {name: OURS}, force=True)
    assert os.listdir(tmp_path) == []


def test_file_in_the_place_of_the_folder_is_refused(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("mine", encoding="utf-8")
    with pytest.raises(RefusedError, match="out: cannot be written: "):
        write_files(tmp_path / "out", {"a.cir": OURS})
    assert (tmp_path / "out").read_text(encoding="utf-8") == "mine"


def test_refusal_of_the_system_is_told(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(source: Path, target: Path) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(os, "replace", refuse)
    with pytest.raises(RefusedError, match="cannot be written: Permission denied"):
        write_files(tmp_path, {"a.cir": OURS})
    assert os.listdir(tmp_path) == []


def test_text_without_the_marker_is_an_error_of_the_program(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match=r"a\.cir does not carry the marker"):
        write_files(tmp_path, {"a.cir": "R1 1 0 1\n"})
    assert os.listdir(tmp_path) == []
