"""Where text leaves the parent: writing that never blocks the watch, and the line that shows progress."""

from __future__ import annotations

import errno
import os
import select
import stat
from collections import deque
from typing import TextIO

__all__ = ["Outlet", "ProgressLine"]

_PIPE_CHUNK = 4096  # a pipe that select calls writable takes this much without blocking (PIPE_BUF)
_FILE_CHUNK = 1 << 20


class Outlet:
    """A queue before one of the standard streams.

    `put` never blocks; `write_some` writes one chunk and is called when `select` finds `descriptor`
    writable. A stream without a descriptor (a captured one, in a test) is written directly.
    `gone` tells that the reader went away, `fault` holds any other error of the system.
    """

    def __init__(self, stream: TextIO | None) -> None:
        self._stream = stream
        self._queue: deque[memoryview] = deque()
        self.gone = stream is None
        self.fault: OSError | None = None
        self.descriptor = _descriptor(stream)
        self._chunk = _FILE_CHUNK if _is_regular(self.descriptor) else _PIPE_CHUNK
        if stream is not None:
            try:
                stream.flush()  # what stands in the buffer must come first, and not once more from a worker
            except OSError as error:
                self._fail(error)
                if (
                    self.descriptor is not None
                ):  # else the interpreter tries once more when it ends, and complains
                    os.dup2(os.open(os.devnull, os.O_WRONLY), self.descriptor)

    @property
    def pending(self) -> bool:
        """Whether text is waiting."""
        return bool(self._queue) and not self.gone

    def put(self, data: bytes) -> None:
        """Queue `data`."""
        if self.gone or not data:
            return
        if self.descriptor is None:
            assert self._stream is not None
            self._stream.write(data.decode("utf-8", "backslashreplace"))
            self._stream.flush()
        else:
            self._queue.append(memoryview(data))

    def write_some(self) -> None:
        """Write the next chunk."""
        if not self.pending or self.descriptor is None:
            return
        head = self._queue[0]
        if len(head) < self._chunk and len(self._queue) > 1:
            head = self._joined()
        try:
            written = os.write(self.descriptor, head[: self._chunk])
        except BlockingIOError:
            return
        except OSError as error:
            self._fail(error)
            return
        if written < len(head):
            self._queue[0] = head[written:]
        else:
            self._queue.popleft()

    def _joined(self) -> memoryview:
        """Make one of the small texts at the head of the queue: a call for each of them costs too much."""
        parts: list[memoryview] = []
        length = 0
        while self._queue and length < self._chunk:
            parts.append(self._queue.popleft())
            length += len(parts[-1])
        self._queue.appendleft(memoryview(b"".join(parts)))
        return self._queue[0]

    def _fail(self, error: OSError) -> None:
        self.gone = True
        self._queue.clear()
        if error.errno != errno.EPIPE:
            self.fault = error


class ProgressLine:
    """One line on a terminal that says what is being worked on, and leaves no trace.

    It appears only when the work lasts longer than a second.
    """

    def __init__(self, stream: TextIO | None, wanted: bool) -> None:
        self._descriptor = _descriptor(stream)
        self._shown = ""
        self._wanted = (
            wanted
            and self._descriptor is not None
            and os.isatty(self._descriptor)
            and os.environ.get("TERM") != "dumb"
        )

    def show(self, stage: str, seconds: float) -> None:
        """Bring the line up to date; costs nothing while it would not change."""
        if not self._wanted or seconds < 1:
            return
        words = "".join(letter if letter.isprintable() else " " for letter in stage)
        line = f"working: {words} ({int(seconds)} s)" if words else f"working ({int(seconds)} s)"
        if line != self._shown:
            self._write("\r" + line[: self._columns() - 1] + "\x1b[K")
            self._shown = line

    def erase(self) -> None:
        """Take the line off the terminal."""
        if self._shown:
            self._write("\r\x1b[K")
            self._shown = ""

    def _columns(self) -> int:
        assert self._descriptor is not None
        try:
            return os.get_terminal_size(self._descriptor).columns or 80
        except OSError:
            return 80

    def _write(self, text: str) -> None:
        assert self._descriptor is not None
        try:
            if select.select([], [self._descriptor], [], 0)[1]:
                os.write(self._descriptor, text.encode("utf-8", "replace"))
        except OSError:
            self._wanted = False


def _descriptor(stream: TextIO | None) -> int | None:
    if stream is None:
        return None
    try:
        return stream.fileno()
    except (OSError, ValueError, AttributeError):  # io.UnsupportedOperation is both of the first two
        return None


def _is_regular(descriptor: int | None) -> bool:
    if descriptor is None:
        return False
    try:
        return stat.S_ISREG(os.fstat(descriptor).st_mode)
    except OSError:
        return False
