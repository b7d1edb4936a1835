"""The store and its faults: full disk, read-only folder, damage, newer version, two processes, a changed study."""

import os
import shutil
import sqlite3
import subprocess
import sys
from pathlib import Path

import pytest

import ergo
from ergo.errors import DataError
from ergo.explore.axes import placements_of
from ergo.explore.fingerprint import WORDS
from ergo.explore.outcome import COLUMNS
from ergo.explore.reading import read_store
from ergo.explore.store import Row, open_store
from ergo.explore.sweep import head_of, sweep
from ergo.explore.workers import OwnHands
from tests.explore.fast_judge import judge

CHECKOUT = Path(__file__).resolve().parents[2]
STUDY = ergo.read_study("gasket_punch")
ASKED = placements_of(STUDY, ["lever.length_mm=200:249:1", "linkage.branch=open,crossed"])


def swept(path):
    """A finished sweep."""
    sweep(STUDY, ASKED, path, workers=0, judge=judge)
    return path


def stopped(path, count):
    """A sweep that somebody stops by Ctrl-C while placement `count` is judged."""
    judged = []

    def until_stopped(study):
        judged.append(study)
        if len(judged) > count:
            raise KeyboardInterrupt
        return judge(study)

    with pytest.raises(KeyboardInterrupt):
        sweep(STUDY, ASKED, path, workers=0, judge=until_stopped)
    return path


def rows(path):
    with sqlite3.connect(path) as connection:
        found = connection.execute("SELECT * FROM placements ORDER BY placement").fetchall()
    connection.close()
    return found


def test_a_row_a_placement_with_inputs_outcome_and_hash(tmp_path):
    path = swept(tmp_path / "s.db")
    head, frame = read_store(path)
    assert head.paths == ("lever.length_mm", "linkage.branch")
    assert frame["placement"].tolist() == list(range(100))
    assert frame["lever.length_mm"].tolist() == [200.0 + n // 2 for n in range(100)]
    assert frame["linkage.branch"].tolist() == ["open", "crossed"] * 50
    assert frame["hand_travel_mm"].tolist() == pytest.approx([1.2 * (200.0 + n // 2) for n in range(100)])
    assert set(COLUMNS) < set(frame.columns)
    assert frame["rests_on"].nunique() == 1
    with sqlite3.connect(path) as connection:
        assert connection.execute("PRAGMA journal_mode").fetchone() == ("wal",)
    connection.close()
    assert sorted(p.name for p in tmp_path.iterdir()) == ["s.db"]


def test_a_stopped_sweep_goes_on_where_it_was(tmp_path):
    path = stopped(tmp_path / "s.db", 30)
    before = rows(path)
    assert 0 < len(before) <= 30
    judged = []
    sweep(STUDY, ASKED, path, resume=True, workers=0, judge=lambda study: judged.append(study) or judge(study))
    assert len(judged) == 100 - len(before)
    assert rows(path)[: len(before)] == before
    assert rows(path) == rows(swept(tmp_path / "undisturbed.db"))


def test_a_finished_sweep_is_not_begun_again(tmp_path):
    path = swept(tmp_path / "s.db")
    with pytest.raises(DataError, match=r"holds a sweep already \(100 placements\); go on with --resume"):
        swept(path)
    assert sweep(STUDY, ASKED, path, resume=True, workers=0, judge=judge) == 0


@pytest.mark.parametrize("workers", [1, 2, 3])
def test_rows_do_not_depend_on_the_number_of_workers(tmp_path, workers):
    sweep(STUDY, ASKED, tmp_path / "many.db", workers=workers, judge=judge)
    assert rows(tmp_path / "many.db") == rows(swept(tmp_path / "one.db"))


@pytest.mark.parametrize(("what", "change"), [
    ("the study", lambda: (STUDY.with_values({"load.force_n": 400.0}), ASKED)),
    ("what is varied", lambda: (STUDY, placements_of(STUDY, ["lever.length_mm=200:250:1"]))),
])  # fmt: skip
def test_another_study_or_other_axes_are_refused_by_name(tmp_path, what, change):
    path = swept(tmp_path / "s.db")
    before = path.read_bytes()
    study, asked = change()
    with pytest.raises(DataError, match=f"{what} has changed since this sweep began"):
        sweep(study, asked, path, resume=True, workers=0, judge=judge)
    assert path.read_bytes() == before


@pytest.mark.parametrize("part", ["code", "data"])
def test_other_code_or_tables_are_refused_by_name(tmp_path, part):
    path = swept(tmp_path / "s.db")
    with sqlite3.connect(path) as connection:
        connection.execute("UPDATE head SET value = 'other' WHERE name = ?", (f"hash.{part}",))
    connection.close()
    with pytest.raises(DataError, match=f"{WORDS[part]} ha"):
        sweep(STUDY, ASKED, path, resume=True, workers=0, judge=judge)


def test_workers_with_other_code_are_refused(tmp_path, monkeypatch):
    head = head_of(STUDY, ASKED)
    monkeypatch.setattr("ergo.explore.workers.code_hash", lambda: "another")
    with pytest.raises(DataError, match="a worker runs another version of Pullward"):
        sweep(STUDY, ASKED, tmp_path / "s.db", crew=OwnHands(), judge=judge)
    with open_store(tmp_path / "s.db", head, resume=True) as store:
        assert store.kept == 0


def test_a_newer_store_is_left_as_it_is(tmp_path):
    path = swept(tmp_path / "s.db")
    with sqlite3.connect(path) as connection:
        connection.execute("PRAGMA user_version = 7")
    connection.close()
    before = path.read_bytes()
    for use in (lambda: sweep(STUDY, ASKED, path, resume=True, workers=0, judge=judge), lambda: read_store(path)):
        with pytest.raises(DataError, match=r"newer Pullward \(store format 7, this one reads up to 1\); update"):
            use()
    assert path.read_bytes() == before


def cut(content):
    return content[: len(content) // 2]


def scrambled(content):
    return content[:5000] + bytes(4000) + content[9000:]


def headless(content):
    return b"This is no database at all. " * 40 + content[1120:]


@pytest.mark.parametrize("damage", [cut, scrambled, headless])
def test_a_damaged_store_is_told_and_left_as_it_is(tmp_path, damage):
    path = swept(tmp_path / "s.db")
    path.write_bytes(damage(path.read_bytes()))
    before = path.read_bytes()
    with pytest.raises(DataError, match=r"the store is damaged .* left as it is"):
        sweep(STUDY, ASKED, path, resume=True, workers=0, judge=judge)
    assert path.read_bytes() == before
    assert sorted(p.name for p in tmp_path.iterdir() if p.suffix == ".lock") == []


def test_one_changed_digit_in_a_row_is_noticed(tmp_path):
    path = swept(tmp_path / "s.db")
    with sqlite3.connect(path) as connection:
        connection.execute("UPDATE placements SET served = served + 0.001 WHERE placement = 41")
    connection.close()
    with pytest.raises(DataError, match="placement 41 is not as it was written"):
        read_store(path)


def test_another_programs_file_is_no_store(tmp_path):
    path = tmp_path / "other.db"
    with sqlite3.connect(path) as connection:
        connection.execute("CREATE TABLE accounts (name TEXT)")
    connection.close()
    before = path.read_bytes()
    with pytest.raises(DataError, match="no Pullward sweep"):
        sweep(STUDY, ASKED, path, resume=True, workers=0, judge=judge)
    assert path.read_bytes() == before


def test_a_missing_folder_and_a_folder_as_store_are_told(tmp_path):
    with pytest.raises(DataError, match="there is no folder"):
        swept(tmp_path / "nowhere" / "s.db")
    (tmp_path / "folder.db").mkdir()
    with pytest.raises(DataError, match=r"folder\.db: (is not a file|cannot be written)"):
        swept(tmp_path / "folder.db")
    with pytest.raises(DataError, match="there is no such store"):
        read_store(tmp_path / "none.db")


def test_two_processes_on_one_store(tmp_path):
    path = tmp_path / "s.db"
    with open_store(path, head_of(STUDY, ASKED), resume=False) as store:
        script = (
            "import sys; from pathlib import Path; from tests.explore import test_store as t\n"
            "try: t.sweep(t.STUDY, t.ASKED, Path(sys.argv[1]), resume=True, workers=0, judge=t.judge)\n"
            "except t.DataError as error: print(error)"
        )
        done = subprocess.run([sys.executable, "-c", script, str(path)], capture_output=True, text=True, check=True,
                              env={**os.environ, "PYTHONPATH": str(CHECKOUT)})  # fmt: skip
        assert done.stdout.strip().endswith("another sweep is running on this store; wait for it, or name another file")
        store.add([Row(0, ASKED.values(0), judge(STUDY))])
        # Whoever only reads may do so meanwhile.
        assert len(read_store(path)[1]) == 1
    assert sweep(STUDY, ASKED, path, resume=True, workers=0, judge=judge) == 99


@pytest.fixture
def small_disk(tmp_path):
    """A disk of 600 KB; skipped where a file system cannot be mounted."""
    place = tmp_path / "disk"
    place.mkdir()
    mount = shutil.which("mount")
    if mount is None or os.geteuid() != 0:
        pytest.skip("mounting a small disk needs root")
    made = subprocess.run([mount, "-t", "tmpfs", "-o", "size=600k", "tmpfs", str(place)], check=False, capture_output=True)
    if made.returncode != 0:
        pytest.skip("this system lets nobody mount")
    yield place
    subprocess.run(["umount", str(place)], check=True)


def test_a_full_disk_is_told_and_nothing_is_lost(small_disk):
    path, filling = small_disk / "s.db", small_disk / "filling"
    many = placements_of(STUDY, ["lever.length_mm=200:399:0.1"])
    judged = []

    def judge_and_fill(study):
        judged.append(study)
        if len(judged) == 300:
            with filling.open("wb", buffering=0) as out, pytest.raises(OSError, match="No space left"):  # noqa: PT012
                while True:
                    out.write(bytes(4096))
        return judge(study)

    with pytest.raises(DataError, match=r"the disk is full; the \d+ placements kept so far are safe, go on with --resume"):
        sweep(STUDY, many, path, workers=0, judge=judge_and_fill)
    filling.unlink()
    kept = len(read_store(path)[1])
    assert 0 < kept <= len(judged)
    elsewhere = shutil.copy(path, small_disk.parent / "elsewhere.db")
    assert sweep(STUDY, many, Path(elsewhere), resume=True, workers=0, judge=judge) == many.count - kept


def test_a_disk_too_small_from_the_start(small_disk):
    (small_disk / "filling").write_bytes(bytes(598 * 1024))
    with pytest.raises(DataError, match=r"s\.db: (the disk is full|cannot be written)"):
        sweep(STUDY, ASKED, small_disk / "s.db", workers=0, judge=judge)


def test_a_read_only_folder_is_told_and_can_still_be_read(small_disk):
    swept(small_disk / "s.db")
    subprocess.run(["mount", "-o", "remount,ro", str(small_disk)], check=True)
    with pytest.raises(DataError, match="the folder is read-only"):
        sweep(STUDY, ASKED, small_disk / "new.db", workers=0, judge=judge)
    with pytest.raises(DataError, match="the folder is read-only"):
        sweep(STUDY, ASKED, small_disk / "s.db", resume=True, workers=0, judge=judge)
    assert len(read_store(small_disk / "s.db")[1]) == 100
