"""Folders are written whole or not at all."""

import errno
import os
from pathlib import Path

import pytest

from ergo.errors import DataError
from ergo.report.files import write_folder

FILES = {"mark": b"1", "deep/er/file.txt": b"two"}


def everything(folder):
    return sorted(p.relative_to(folder).as_posix() for p in Path(folder).rglob("*"))


def test_a_folder_is_written_with_its_folders(tmp_path):
    write_folder(tmp_path / "out", FILES, "mark")
    assert everything(tmp_path / "out") == ["deep", "deep/er", "deep/er/file.txt", "mark"]


def test_its_own_folder_is_replaced_without_leftovers(tmp_path):
    write_folder(tmp_path / "out", {**FILES, "old.txt": b"x"}, "mark")
    write_folder(tmp_path / "out", FILES, "mark")
    assert "old.txt" not in everything(tmp_path / "out")
    assert os.listdir(tmp_path) == ["out"]


def test_another_folder_is_left_alone(tmp_path):
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "thesis.doc").write_text("years of work")
    with pytest.raises(DataError, match="was not written by this command"):
        write_folder(tmp_path / "out", FILES, "mark")
    assert everything(tmp_path) == ["out", "out/thesis.doc"]


def test_a_full_disk_leaves_nothing_and_says_so_in_one_sentence(tmp_path, monkeypatch):
    write_folder(tmp_path / "out", {"mark": b"old"}, "mark")

    def full(self, content):
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(Path, "write_bytes", full)
    with pytest.raises(DataError, match="No space left on device") as caught:
        write_folder(tmp_path / "out", FILES, "mark")
    assert caught.value.exit_code == 3
    assert "\n" not in str(caught.value)
    assert everything(tmp_path) == ["out", "out/mark"]
    assert (tmp_path / "out" / "mark").read_bytes() == b"old"


def test_a_place_that_cannot_be_is_refused_in_one_sentence(tmp_path):
    (tmp_path / "file").write_text("x")
    with pytest.raises(DataError) as caught:
        write_folder(tmp_path / "file" / "out", FILES, "mark")
    assert "\n" not in str(caught.value)
    assert everything(tmp_path) == ["file"]
