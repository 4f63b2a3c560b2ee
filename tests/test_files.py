"""Files and folders appear whole or not at all, whatever goes wrong and whoever is killed."""

import errno
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from symplant.errors import InputError
from symplant.writing import files
from symplant.writing.files import (
    require_file_target,
    require_folder_target,
    settle,
    staged_folder,
    write_whole,
)

PROGRAM = Path(__file__).with_name("supervised_jobs.py")


def tree(folder):
    """Every file under `folder`, hidden ones too, with its text."""
    return {
        str(path.relative_to(folder)): path.read_text() if path.is_file() else "/"
        for path in Path(folder).rglob("*")
    }


def fill(folder, **texts):
    for name, text in texts.items():
        path = folder / name.replace("__", "/").replace("_", ".")
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text)


class Log:
    """What a channel would have been told."""

    def __init__(self):
        self.told = []

    def staging(self, path):
        assert not path.exists()  # told before there is anything to clear
        self.told.append("staging")

    def committing(self, path, target):
        self.told.append("committing")

    def settled(self, path):
        assert not path.exists()
        self.told.append("settled")


# Folders


def test_new_folder_appears_with_all_that_is_in_it(tmp_path):
    log = Log()
    with staged_folder(tmp_path / "a" / "report", log) as folder:
        fill(folder, main_tex="main", plots__root_svg="svg")
        (folder / "empty").mkdir()
        assert not (tmp_path / "a").exists()
    assert tree(tmp_path / "a") == {
        "report": "/",
        "report/main.tex": "main",
        "report/plots": "/",
        "report/plots/root.svg": "svg",
        "report/empty": "/",
    }
    assert [path.name for path in tmp_path.iterdir()] == ["a"]
    assert log.told == ["staging", "committing", "settled"]


def test_foreign_files_are_left_alone_and_own_ones_replaced(tmp_path):
    target = tmp_path / "report"
    fill(target, main_tex="old", notes_txt="mine", plots__mine_svg="mine")
    with staged_folder(target) as folder:
        fill(folder, main_tex="new", plots__root_svg="new")
        assert (target / "main.tex").read_text() == "old"
    assert tree(tmp_path) == {
        "report": "/",
        "report/main.tex": "new",
        "report/notes.txt": "mine",
        "report/plots": "/",
        "report/plots/mine.svg": "mine",
        "report/plots/root.svg": "new",
    }


@pytest.mark.parametrize("there", [True, False])
@pytest.mark.parametrize("error", [ValueError, KeyboardInterrupt, InputError([])])
def test_failing_block_leaves_nothing(tmp_path, there, error):
    if there:
        fill(tmp_path / "report", main_tex="old")
    before, log = tree(tmp_path), Log()
    with (
        pytest.raises(error if isinstance(error, type) else InputError),
        staged_folder(tmp_path / "report", log) as folder,
    ):
        fill(folder, main_tex="new", more_tex="new")
        raise error
    assert tree(tmp_path) == before
    assert log.told == ["staging", "settled"]


@pytest.mark.parametrize("links", [True, False])
@pytest.mark.parametrize("fails_at", [0, 1, 2, 3])
def test_failing_move_puts_everything_back(tmp_path, monkeypatch, fails_at, links):
    target = tmp_path / "report"
    fill(target, a_tex="old a", b_tex="old b", notes_txt="mine")
    before = tree(tmp_path)
    plain, calls = Path.replace, []

    def replace(self, goal):
        calls.append(goal)
        if len(calls) == fails_at + 1:
            raise OSError(errno.EIO, "Input/output error")
        return plain(self, goal)

    def no_links(*_, **__):
        raise OSError(errno.EPERM, "Operation not permitted")

    if not links:
        monkeypatch.setattr(os, "link", no_links)
    with pytest.raises(InputError, match="Input/output error"), staged_folder(target) as folder:
        fill(folder, a_tex="new", b_tex="new", c_tex="new", d__e_tex="new")
        monkeypatch.setattr(Path, "replace", replace)
    assert len(calls) > fails_at
    assert tree(tmp_path) == before


def test_places_taken_by_another_kind_are_all_named_before_anything_moves(tmp_path):
    target = tmp_path / "report"
    fill(target, a_tex__x="mine", plots="mine", z_tex="old")
    before = tree(tmp_path)
    with pytest.raises(InputError) as caught, staged_folder(target) as folder:
        fill(folder, a_tex="new", plots__root_svg="new", z_tex="new")
    assert [fault.reason for fault in caught.value.faults] == [
        "is a folder, and a file is to be written",
        "is a file, and a folder is to be written",
    ]
    assert tree(tmp_path) == before


def test_link_to_a_folder_is_written_through(tmp_path):
    fill(tmp_path / "far", main_tex="old")
    (tmp_path / "report").symlink_to("far")
    with staged_folder(tmp_path / "report") as folder:
        fill(folder, main_tex="new")
    assert (tmp_path / "report").is_symlink()
    assert (tmp_path / "far" / "main.tex").read_text() == "new"


def test_folder_whose_surroundings_are_read_only_is_staged_inside(tmp_path, monkeypatch):
    target = tmp_path / "report"
    fill(target, main_tex="old")
    allowed = os.access  # the tests may run as root, to whom everything is open
    monkeypatch.setattr(os, "access", lambda path, mode: Path(path) != tmp_path and allowed(path, mode))
    with staged_folder(target) as folder:
        assert target in folder.parents
        fill(folder, main_tex="new")
    assert tree(tmp_path) == {"report": "/", "report/main.tex": "new"}


@pytest.mark.parametrize("check", [require_folder_target, lambda target: staged_folder(target).__enter__()])
def test_folder_target_at_fault(tmp_path, check):
    fill(tmp_path, file="text")
    with pytest.raises(InputError, match="is a file, and a folder is to be written"):
        check(tmp_path / "file")
    with pytest.raises(InputError, match=r"lies under .*file, which is a file"):
        check(tmp_path / "file" / "report")
    assert tree(tmp_path) == {"file": "text"}


def test_folder_where_the_system_allows_none_is_a_fault():
    with pytest.raises(InputError, match="cannot be written"), staged_folder(Path("/proc/report")):
        pass


def test_write_protected_place_is_a_fault(tmp_path, monkeypatch):
    monkeypatch.setattr(os, "access", lambda path, mode: False)
    with pytest.raises(InputError, match="is write-protected"):
        require_folder_target(tmp_path / "report")
    with pytest.raises(InputError, match="is write-protected"):
        require_file_target(tmp_path / "report.tex")


# Single files


def test_file_is_written_and_replaced_with_its_mode(tmp_path):
    log, target = Log(), tmp_path / "a" / "plant.tex"
    write_whole(target, b"one", log)
    assert (target.read_bytes(), log.told) == (b"one", ["staging", "settled"])
    plain = tmp_path / "plain"
    plain.write_bytes(b"")
    assert target.stat().st_mode == plain.stat().st_mode  # what the umask leaves, as for any other file
    target.chmod(0o640)
    write_whole(target, b"two")
    assert (target.read_bytes(), target.stat().st_mode & 0o777) == (b"two", 0o640)
    assert tree(tmp_path / "a") == {"plant.tex": "two"}


def test_link_to_a_file_is_written_through(tmp_path):
    fill(tmp_path, far_tex="old")
    (tmp_path / "near.tex").symlink_to("far.tex")
    write_whole(tmp_path / "near.tex", b"new")
    assert (tmp_path / "near.tex").is_symlink()
    assert tree(tmp_path) == {"far.tex": "new", "near.tex": "new"}


@pytest.mark.parametrize("error", [OSError(errno.ENOSPC, "No space left on device"), MemoryError()])
def test_failing_write_leaves_the_old_file(tmp_path, monkeypatch, error):
    fill(tmp_path, plant_tex="old")

    def replace(self, goal):
        raise error

    monkeypatch.setattr(Path, "replace", replace)
    with pytest.raises(InputError if isinstance(error, OSError) else MemoryError):
        write_whole(tmp_path / "plant.tex", b"new")
    with pytest.raises(InputError if isinstance(error, OSError) else MemoryError):
        write_whole(tmp_path / "deep" / "er" / "plant.tex", b"new")
    assert tree(tmp_path) == {"plant.tex": "old"}


def test_file_target_at_fault(tmp_path):
    fill(tmp_path, file="text")
    os.mkfifo(tmp_path / "pipe")
    for target, words in (
        (tmp_path, "is a folder, and a file is to be written"),
        (tmp_path / "pipe", "is not an ordinary file"),
        (tmp_path / "file" / "plant.tex", "which is a file"),
        (Path("/proc/plant.tex"), "cannot be written"),
    ):
        with pytest.raises(InputError, match=words):
            write_whole(target, b"new")
    assert sorted(path.name for path in tmp_path.iterdir()) == ["file", "pipe"]


# Killed on the way


def test_settling_carries_on_a_move_and_may_be_repeated(tmp_path):
    staging, target = tmp_path / ".report.part", tmp_path / "report"
    fill(target, a_tex="new", b_tex="old")  # a has been moved already
    fill(staging, new__b_tex="new", new__c_tex="new", old__0="old a")
    settle(staging, target)
    settle(staging, target)
    assert tree(tmp_path) == {
        "report": "/",
        "report/a.tex": "new",
        "report/b.tex": "new",
        "report/c.tex": "new",
    }


def test_settling_removes_what_was_never_complete(tmp_path):
    fill(tmp_path / ".report.part", new__a_tex="half")
    settle(tmp_path / ".report.part", None)
    assert tree(tmp_path) == {}


@pytest.mark.parametrize("old", [True, False])
def test_worker_killed_while_it_moves_files(tmp_path, old):
    if old:
        fill(tmp_path / "report", **{f"{number}_tex": "old" for number in range(3)}, notes_txt="mine")
    run = subprocess.run(
        [sys.executable, str(PROGRAM), "killed_while_moving", "marker", json.dumps({}), str(tmp_path)],
        capture_output=True,
        text=True,
        env=os.environ | {"PYTHONPATH": str(PROGRAM.parent.parent)},
        check=False,
        timeout=60,
    )
    new = {"report": "/"} | {f"report/{number}.tex": "new" for number in range(5)}
    if old:
        assert run.returncode == 3 and "SIGKILL" in run.stderr
        assert tree(tmp_path) == new | {"report/notes.txt": "mine"}
    else:
        assert run.returncode == 0  # a new folder moves in one step, which cannot be cut in two
        assert tree(tmp_path) == new


def test_hidden_names_never_meet(tmp_path):
    names = {files._hidden_name(tmp_path, "x" * 300) for _ in range(100)}
    assert len(names) == 100 and all(len(name.name) < 255 for name in names)
