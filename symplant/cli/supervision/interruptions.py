"""Signals that ask the parent to end or to pause, turned into facts that the watch can look at."""

from __future__ import annotations

import os
import signal
import time
from collections.abc import Callable
from types import FrameType
from typing import Any

__all__ = ["Interruptions", "default_handling"]

_ENDING = [getattr(signal, name) for name in ("SIGINT", "SIGTERM", "SIGHUP") if hasattr(signal, name)]
_PAUSING = getattr(signal, "SIGTSTP", None)


class Interruptions:
    """While it is entered, Ctrl-C and its kin are counted and not acted on; Ctrl-Z pauses the worker too.

    received: the first signal that asks for an end, else None
    count: how many came
    paused: seconds that were spent stopped by Ctrl-Z, which no time budget should be charged for

    A signal that was already ignored (nohup, a job in the background) stays ignored. Outside the main
    thread Python allows no handlers, and none are set.
    """

    def __init__(self) -> None:
        self.received: int | None = None
        self.count = 0
        self.paused = 0.0
        self.tell_worker: Callable[[int], None] | None = None
        self._before: dict[int, Any] = {}

    def __enter__(self) -> Interruptions:
        for number in _ENDING:
            self._handle(number, self._note)
        if _PAUSING is not None:
            self._handle(_PAUSING, self._pause)
        return self

    def __exit__(self, *_: object) -> None:
        for number, handler in self._before.items():
            signal.signal(number, handler if handler is not None else signal.SIG_DFL)

    def _handle(self, number: int, handler: Callable[[int, FrameType | None], None]) -> None:
        before = signal.getsignal(number)
        if before is signal.SIG_IGN:
            return
        try:
            signal.signal(number, handler)
        except ValueError:  # not the main thread
            return
        self._before[number] = before

    def _note(self, number: int, _: FrameType | None) -> None:
        self.count += 1
        if self.received is None:
            self.received = number

    def _pause(self, number: int, _: FrameType | None) -> None:
        began = time.monotonic()
        if self.tell_worker is not None:
            self.tell_worker(signal.SIGSTOP)
        signal.signal(number, signal.SIG_DFL)
        os.kill(os.getpid(), number)  # stops here until SIGCONT
        signal.signal(number, self._pause)
        if self.tell_worker is not None:
            self.tell_worker(signal.SIGCONT)
        self.paused += time.monotonic() - began


def default_handling() -> None:
    """Give every signal that the parent handles its default meaning back (for a worker)."""
    for number in (*_ENDING, _PAUSING):
        if number is not None and signal.getsignal(number) is not signal.SIG_IGN:
            signal.signal(number, signal.SIG_DFL)
