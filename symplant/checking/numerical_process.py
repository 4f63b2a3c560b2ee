"""A process on the side that loads NumPy and SciPy while its parent derives, and computes for it.

It ends when its parent ends, however that comes about: the pipe that it reads from closes, and should
another process hold that pipe open, it sees that it has a new parent.
"""

from __future__ import annotations

import contextlib
import os
import select
import signal
import struct
import sys
import threading
import time
import weakref
from typing import NoReturn

from symplant.checking.eigenvalues import answer, import_libraries

__all__ = ["NumericalProcess"]

_LENGTH = struct.Struct("!Q")
_STANDARD = 2  # the last of the standard descriptors
_PULSE = 0.5  # seconds between two looks at who the parent is


class NumericalProcess:
    """Answers requests of `eigenvalues.answer`, on the side where that is possible and worth it.

    Without `os.fork`, in a process of several threads (where forking is not safe), and where NumPy is
    loaded already, the work is done in this process instead, when it is asked for.

    >>> process = NumericalProcess()
    >>> process.ask("1 0.5").split()[:3]  # the size of A, and its eigenvalue as a complex number
    ['0.5', '0.5', '0.0']
    >>> process.close()
    """

    def __init__(self) -> None:
        self.pid: int | None = None
        self._end: weakref.finalize[[int, int, int, int], NumericalProcess] | None = None
        if not hasattr(os, "fork") or threading.active_count() > 1 or "numpy" in sys.modules:
            return
        pipes = (*os.pipe(), *os.pipe())
        if min(pipes) <= _STANDARD:  # a standard descriptor was closed: not a place to build on
            for descriptor in pipes:
                os.close(descriptor)
            return
        requests, self._requests, self._answers, answers = pipes
        parent = os.getpid()
        self.pid = os.fork()
        if self.pid == 0:
            _serve(requests, answers, parent)
        os.close(requests)
        os.close(answers)
        self._end = weakref.finalize(self, _ended, self.pid, parent, self._requests, self._answers)

    def __enter__(self) -> NumericalProcess:
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    def ask(self, request: str, patience: float = 120.0) -> str:
        """The answer to a request.

        Errors: OSError (TimeoutError among them) if the process on the side is gone or does not answer.
        """
        if self._end is None:
            return answer(request)
        data = request.encode()
        _write(self._requests, _LENGTH.pack(len(data)) + data)
        limit = time.monotonic() + patience
        (length,) = _LENGTH.unpack(_read(self._answers, _LENGTH.size, limit))
        return _read(self._answers, length, limit).decode()

    def close(self) -> None:
        """End the process on the side and wait until it is gone; may be called again."""
        if self._end is not None:
            self._end()
            self._end = None


def _ended(pid: int, parent: int, *descriptors: int) -> None:
    if os.getpid() != parent:  # a copy of this object in a forked process is not in charge
        return
    for descriptor in descriptors:
        with contextlib.suppress(OSError):
            os.close(descriptor)
    with contextlib.suppress(OSError):
        os.kill(pid, signal.SIGKILL)  # our own child and not waited for yet, so the number is still its own
    with contextlib.suppress(OSError):
        os.waitpid(pid, 0)


def _write(descriptor: int, data: bytes) -> None:
    while data:
        data = data[os.write(descriptor, data) :]


def _read(descriptor: int, length: int, limit: float) -> bytes:
    data = b""
    while len(data) < length:
        ready, _, _ = select.select([descriptor], [], [], max(0.0, limit - time.monotonic()))
        if not ready:
            raise TimeoutError("no answer in time")
        part = os.read(descriptor, length - len(data))
        if not part:
            raise BrokenPipeError("the process has ended")
        data += part
    return data


def _serve(requests: int, answers: int, parent: int) -> NoReturn:
    """The life of the process on the side; never returns into the parent's code."""
    try:
        signal.signal(signal.SIGINT, signal.SIG_IGN)  # the parent decides what an interruption means
        for number in (signal.SIGTERM, signal.SIGPIPE):
            signal.signal(number, signal.SIG_DFL)
        nowhere = os.open(os.devnull, os.O_RDWR)
        for standard in range(_STANDARD + 1):
            os.dup2(nowhere, standard)
        low, high = sorted((requests, answers))
        os.closerange(_STANDARD + 1, low)
        os.closerange(low + 1, high)
        os.closerange(high + 1, 1 << 16)  # above all pipes whose ends others wait for
        for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
            os.environ.setdefault(name, "1")
        import_libraries()
        while True:
            (length,) = _LENGTH.unpack(_awaited(requests, _LENGTH.size, parent))
            result = answer(_awaited(requests, length, parent).decode()).encode()
            _write(answers, _LENGTH.pack(len(result)) + result)
    finally:
        os._exit(0)


def _awaited(descriptor: int, length: int, parent: int) -> bytes:
    data = b""
    while len(data) < length:
        ready, _, _ = select.select([descriptor], [], [], _PULSE)
        if os.getppid() != parent:
            raise EOFError
        if ready:
            part = os.read(descriptor, length - len(data))
            if not part:
                raise EOFError
            data += part
    return data
