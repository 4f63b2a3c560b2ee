"""Files and folders that appear whole or not at all.

What is written grows in a hidden place beside its target and is moved there when it is complete. Moves
are renames, which the system carries out in one step. This guards against errors and against the end of
the process at any moment, not against a loss of power.
"""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import Protocol

from symplant.errors import Fault, InputError

__all__ = [
    "StagingLog",
    "require_file_target",
    "require_folder_target",
    "settle",
    "staged_folder",
    "write_whole",
]


class StagingLog(Protocol):
    """Who is told about staging places, and clears them if this process is killed (see `Channel`)."""

    def staging(self, path: Path) -> None:
        """`path` is about to be made."""

    def committing(self, path: Path, target: Path) -> None:
        """`path` is complete and is now moved to `target`."""

    def settled(self, path: Path) -> None:
        """Nothing is left of `path`."""


def require_folder_target(target: Path) -> None:
    """Check before any work that a folder can be written at `target`; InputError if it cannot."""
    place = _real(target)
    if os.path.lexists(place) and not place.is_dir():
        raise _fault(target, "is a file, and a folder is to be written", "name another folder")
    _require_writable(place if place.is_dir() else _existing_ancestor(place), target)


def require_file_target(target: Path) -> None:
    """Check before any work that a file can be written at `target`; InputError if it cannot."""
    place = _real(target)
    if place.is_dir():
        raise _fault(target, "is a folder, and a file is to be written", "name a file")
    if os.path.lexists(place):
        if not place.is_file():
            raise _fault(target, "is not an ordinary file", "name another file")
        if not os.access(place, os.W_OK):
            raise _fault(target, "is write-protected", "name another file")
    _require_writable(_existing_ancestor(place), target)


@contextmanager
def staged_folder(target: Path, log: StagingLog | None = None) -> Iterator[Path]:
    """An empty folder to write into; when the block ends well, all in it moves to `target`.

    A `target` that is not there yet appears in one step. In one that is there, files of the same names
    are replaced and all others are left alone; if one cannot be moved, those already moved are put
    back. When the block raises, nothing of it remains. `log` (a `Channel`) makes that hold also when
    this process is killed: the rest of a move that has begun is then carried out by its parent.

    InputError: `target` is a file or cannot be written.

    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as there:
    ...     with staged_folder(Path(there) / "report") as folder:
    ...         _ = (folder / "plant.tex").write_text("x", encoding="utf-8")
    ...     sorted(path.name for path in Path(there).rglob("*"))
    ['plant.tex', 'report']
    """
    require_folder_target(target)
    place = _real(target)
    staging = _staging_folder(place)
    if log is not None:
        log.staging(staging)
    try:
        try:
            (staging / "new").mkdir(parents=True)
        except OSError as error:
            raise _fault(target, f"cannot be written ({error.strerror})", "name another folder") from error
        yield staging / "new"
        _require_free(staging / "new", place)
        if log is not None:
            log.committing(staging, place)
        try:
            _move_into_place(staging, place)
        except OSError as error:
            raise _fault(target, f"cannot be written ({error.strerror})", "name another folder") from error
    finally:
        _remove(staging)
        if log is not None:
            log.settled(staging)


def write_whole(target: Path, data: bytes, log: StagingLog | None = None) -> None:
    """Write a file so that at any moment either all of it is there or what was there before.

    An existing file keeps its mode; a symbolic link is followed. Missing folders are made.

    InputError: `target` is a folder or cannot be written.

    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as there:
    ...     write_whole(Path(there) / "plant.toml", b"format = 1")
    ...     os.listdir(there)
    ['plant.toml']
    """
    require_file_target(target)
    place = _real(target)
    made: list[Path] = []
    staging = _hidden_name(_existing_ancestor(place), place.name)
    if log is not None:
        log.staging(staging)
    try:
        with staging.open("xb") as file:
            file.write(data)
        if place.exists():
            staging.chmod(place.stat().st_mode & 0o7777)
        _make_folder(place.parent, made)
        staging.replace(place)
    except BaseException as error:
        _remove(staging)
        for folder in reversed(made):
            with suppress(OSError):
                folder.rmdir()
        if isinstance(error, OSError):
            raise _fault(target, f"cannot be written ({error.strerror})", "name another file") from error
        raise
    finally:
        if log is not None:
            log.settled(staging)


def settle(staging: Path, target: Path | None) -> None:
    """Clear a staging place whose process is gone: finish the move to `target`, if one had begun; remove it.

    OSError: that did not work, and something may be left of it.
    """
    try:
        if target is not None and (staging / "new").is_dir():
            _move_into_place(staging, target)
    finally:
        _remove(staging)


def _move_into_place(staging: Path, target: Path) -> None:
    """Move all under staging/new to `target`; on an error put everything back as it was."""
    new, old = staging / "new", staging / "old"
    made: list[Path] = []
    moved: list[tuple[Path, Path | None]] = []
    try:
        _make_folder(target.parent, made)
        if not target.exists():
            new.rename(target)  # the whole folder in one step
            return
        old.mkdir(exist_ok=True)
        for source in sorted(new.rglob("*")):  # a folder sorts before what is in it
            goal = target / source.relative_to(new)
            if source.is_dir() and not source.is_symlink():
                _make_folder(goal, made)
                continue
            saved = _saved(goal, old / str(len(moved))) if os.path.lexists(goal) else None
            source.replace(goal)
            moved.append((goal, saved))
    except BaseException:
        for goal, saved in reversed(moved):
            if saved is None:
                goal.unlink(missing_ok=True)
            else:
                saved.replace(goal)
        for folder in reversed(made):
            with suppress(OSError):
                folder.rmdir()
        raise


def _saved(goal: Path, place: Path) -> Path:
    """Keep the file that stands at `goal` under a second name, without taking it away meanwhile."""
    place.unlink(missing_ok=True)
    try:
        os.link(goal, place, follow_symlinks=False)
    except (OSError, NotImplementedError):  # a file system without hard links
        import shutil

        shutil.copy2(goal, place, follow_symlinks=False)
    return place


def _require_free(new: Path, target: Path) -> None:
    """Every file in `new` has a place in `target` that it can take; all that have none are named at once."""
    faults = []
    for source in sorted(new.rglob("*")):
        goal = target / source.relative_to(new)
        if not os.path.lexists(goal):
            continue
        if source.is_dir() != goal.is_dir():
            kinds = ("a file", "a folder") if source.is_dir() else ("a folder", "a file")
            faults.append(
                Fault(str(goal), f"is {kinds[0]}, and {kinds[1]} is to be written", "name another folder")
            )
    if faults:
        raise InputError(faults)


def _staging_folder(target: Path) -> Path:
    """A name beside `target`; inside it where renames from beside would not work."""
    beside = _existing_ancestor(target)
    if target.is_dir() and (
        target.parent.stat().st_dev != target.stat().st_dev or not os.access(target.parent, os.W_OK | os.X_OK)
    ):
        beside = target
    return _hidden_name(beside, target.name)


def _hidden_name(folder: Path, name: str) -> Path:
    return folder / f".{name[:100]}.{os.urandom(6).hex()}.part"


def _existing_ancestor(path: Path) -> Path:
    return next(folder for folder in path.parents if os.path.lexists(folder))


def _make_folder(path: Path, made: list[Path]) -> None:
    """Make `path` and what is missing above it; each one made is added to `made`."""
    if not path.is_dir():
        _make_folder(path.parent, made)
        path.mkdir()
        made.append(path)


def _remove(path: Path) -> None:
    if path.is_dir() and not path.is_symlink():
        import shutil

        shutil.rmtree(path)
    else:
        path.unlink(missing_ok=True)


def _real(path: Path) -> Path:
    """`path` with every symbolic link followed, so that a link is written through and not replaced."""
    return Path(os.path.realpath(path))


def _require_writable(folder: Path, target: Path) -> None:
    if not folder.is_dir():
        raise _fault(target, f"lies under {folder}, which is a file", "name another place")
    if not os.access(folder, os.W_OK | os.X_OK):
        raise _fault(target, f"cannot be written: {folder} is write-protected", "name another place")


def _fault(target: Path, reason: str, suggestion: str) -> InputError:
    return InputError([Fault(str(target), reason, suggestion)])
