"""The guard: a tiny process that clears up after a parent that was killed without a chance to do so."""

from __future__ import annotations

import contextlib
import os
import signal
import time
from typing import NoReturn

from symplant.cli.supervision.channel import FrameReader, Kind, pack
from symplant.cli.supervision.ledger import Ledger

__all__ = ["Guard"]

_STAGING = (Kind.STAGING, Kind.COMMITTING, Kind.SETTLED)


class Guard:
    """Waits at a pipe that only the parent holds open; when it closes, ends the worker's whole group.

    The kernel's own signal on the death of a parent reaches the worker alone, not what the worker
    started, and is known on Linux only. The guard also hears of staging places, and clears those.
    """

    def __init__(self, worker: int) -> None:
        life, self._life = os.pipe()
        self._pid = os.fork()
        if self._pid == 0:
            _guard(life, worker)
        os.close(life)

    def pass_on(self, kind: Kind, payload: bytes) -> None:
        """Tell the guard what the worker said about its files; all else is left out."""
        if kind in _STAGING:
            with contextlib.suppress(OSError):
                os.write(self._life, pack(kind, payload))

    def dismiss(self) -> None:
        """End the guard; the parent has cleared up itself."""
        with contextlib.suppress(OSError):
            os.kill(self._pid, signal.SIGKILL)
            os.waitpid(self._pid, 0)
        os.close(self._life)


def _guard(life: int, worker: int) -> NoReturn:
    try:
        os.setsid()
        for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
            signal.signal(number, signal.SIG_IGN)
        nowhere = os.open(os.devnull, os.O_RDWR)
        os.dup2(life, 0)
        os.dup2(nowhere, 1)
        os.dup2(nowhere, 2)
        os.closerange(3, 1 << 16)  # above all the parent's end of the pipe, and pipes that others wait on
        ledger = Ledger(out=lambda _: None, err=lambda _: None)
        reader = FrameReader()
        while data := os.read(0, 1 << 16):
            for kind, payload in reader.feed(data):
                ledger.take(kind, payload)
        _end_group(worker)
        ledger.tidy()
    finally:
        os._exit(0)


def _end_group(worker: int) -> None:
    with contextlib.suppress(OSError):
        os.kill(worker, signal.SIGKILL)  # in case it does not lead its group yet
    for _ in range(1000):
        try:
            os.killpg(worker, signal.SIGKILL)
        except OSError:  # nobody is left
            return
        time.sleep(0.01)
