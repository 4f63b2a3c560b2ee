"""What the parent knows of the work: stages, kept parts, the ending, and what must not be left behind."""

from __future__ import annotations

import os
from collections.abc import Callable

from symplant.cli.supervision.channel import Kind, to_text

__all__ = ["Ledger"]


class Ledger:
    """Books every message of a worker; text for the outside goes to `out` and `err` at once.

    >>> book = Ledger(out=print, err=print)
    >>> book.take(Kind.PLAN, b"poles\\0zeros\\0report")
    >>> book.take(Kind.STAGE, b"poles")
    >>> book.take(Kind.STAGE, b"zeros")
    >>> book.finished, book.unfinished
    (['poles'], ['zeros', 'report'])
    """

    def __init__(self, out: Callable[[bytes], None], err: Callable[[bytes], None]) -> None:
        self._out, self._err = out, err
        self._planned: list[str] = []
        self._unsettled: dict[str, str] = {}  # staging path -> target once it is complete, else ""
        self.finished: list[str] = []
        self.kept: list[str] = []
        self.current = ""
        self.answered = False  # something was put on standard output
        self.status: int | None = None
        self.failure: tuple[Kind, str] | None = None

    def take(self, kind: Kind, payload: bytes) -> None:
        """Book one message."""
        if kind is Kind.OUT:
            self._out(payload)
            self.answered = True
            self.kept.clear()
        elif kind is Kind.ERR:
            self._err(payload)
        elif kind is Kind.KEEP:
            self.kept.append(to_text(payload))
        elif kind is Kind.STAGE:
            self._begin(to_text(payload))
        elif kind is Kind.PLAN:
            self._planned = to_text(payload).split("\0") if payload else []
        elif kind is Kind.EXIT:
            self.status = int(payload)
        elif kind in (Kind.STAGING, Kind.COMMITTING, Kind.SETTLED):
            self._stage_files(kind, payload)
        else:
            self.failure = (kind, to_text(payload))

    @property
    def unfinished(self) -> list[str]:
        """What was being worked on, then what the plan still holds."""
        waiting = [name for name in self._planned if name not in self.finished and name != self.current]
        return [self.current, *waiting] if self.current else waiting

    def tidy(self) -> list[str]:
        """Finish the moves that had begun, remove every other staging place; what went wrong, in words.

        Call it only when the worker is gone.
        """
        troubles: list[str] = []
        if not self._unsettled:
            return troubles
        from pathlib import Path

        from symplant.writing.files import settle

        for path, target in self._unsettled.items():
            try:
                settle(Path(path), Path(target) if target else None)
            except OSError as error:
                troubles.append(f"could not clear {path}: {error.strerror or error}")
        self._unsettled.clear()
        return troubles

    def _begin(self, name: str) -> None:
        if self.current and self.current not in self.finished:
            self.finished.append(self.current)
        self.current = name
        if name in self.finished:
            self.finished.remove(name)

    def _stage_files(self, kind: Kind, payload: bytes) -> None:
        path, _, target = payload.partition(b"\0")
        if kind is Kind.SETTLED:
            self._unsettled.pop(os.fsdecode(path), None)
        else:
            self._unsettled[os.fsdecode(path)] = os.fsdecode(target)
