"""How much memory a process and everything it started holds, read from /proc (Linux)."""

from __future__ import annotations

import os
import time

__all__ = ["MemoryWatch"]

_PAUSE = 0.02  # seconds between two looks


class MemoryWatch:
    """Watches the resident memory, in bytes, of a worker and its descendants against a limit.

    Elsewhere than on Linux nothing can be read here and only the worker's own limits hold.
    """

    def __init__(self, leader: int, limit: int | None) -> None:
        self._leader, self._limit = leader, limit
        self.next_look = 0.0 if limit is not None else float("inf")  # on the monotonic clock
        self.peak = 0

    def exceeded(self) -> bool:
        """Look, if it is time to, and say whether more than the limit is held."""
        now = time.monotonic()
        if self._limit is None or now < self.next_look:
            return False
        members = descendants(self._leader)
        held = sum(_resident(pid) for pid in members)
        if held > self._limit and len(members) > 1:
            # Pages shared between a process and its fork were counted once for each of them.
            held = sum(_proportional(pid) for pid in members)
        self.peak = max(self.peak, held)
        done = time.monotonic()
        self.next_look = done + max(_PAUSE, 5 * (done - now))  # a costly look is not repeated at once
        return held > self._limit


def descendants(leader: int) -> list[int]:
    """`leader` and every living process that descends from it.

    >>> os.getpid() in descendants(os.getpid())
    True
    """
    found = [leader]
    for pid in found:  # grows while it is walked
        try:
            threads = os.listdir(f"/proc/{pid}/task")  # noqa: PTH208 (50 times a second: no path objects)
        except OSError:
            continue
        for thread in threads:
            found.extend(int(child) for child in _read(f"/proc/{pid}/task/{thread}/children").split())
    return found


def _resident(pid: int) -> int:
    fields = _read(f"/proc/{pid}/statm").split()
    return int(fields[1]) * os.sysconf("SC_PAGE_SIZE") if fields else 0


def _proportional(pid: int) -> int:
    for line in _read(f"/proc/{pid}/smaps_rollup").splitlines():
        if line.startswith(b"Pss:"):
            return int(line.split()[1]) * 1024
    return _resident(pid)


def _read(path: str) -> bytes:
    try:
        descriptor = os.open(path, os.O_RDONLY)
    except OSError:
        return b""
    try:
        return os.read(descriptor, 1 << 16)
    except OSError:  # the process ended between the two calls
        return b""
    finally:
        os.close(descriptor)
