"""The worker: a process of its own in which the job runs and from which it can always be taken away."""

from __future__ import annotations

import contextlib
import errno
import io
import os
import signal
import sys
import time
from collections.abc import Callable
from typing import NoReturn

from symplant.cli.supervision.channel import Channel, Kind, frame_sender, to_bytes
from symplant.cli.supervision.interruptions import default_handling

__all__ = ["Job", "Worker", "carry_out"]

Job = Callable[[Channel], int]

_PR_SET_PDEATHSIG = 1
_DATA_SLACK = (
    256 << 20
)  # address space that is asked for and never touched: thread stacks, allocator reserves


class Worker:
    """A forked process that runs `job`, leader of its own session, seen from its parent.

    frames, chatter: descriptors to read the messages from, and whatever libraries print
    wait_status: as from os.waitpid, None while the worker runs
    """

    def __init__(self, job: Job, max_memory: int | None) -> None:
        _fill_standard_descriptors()
        self.frames, frames = os.pipe()
        self.chatter, chatter = os.pipe()
        self.wait_status: int | None = None
        parent = os.getpid()
        self.pid = os.fork()
        if self.pid == 0:
            _work(job, frames, chatter, parent, max_memory)
        os.close(frames)
        os.close(chatter)
        os.set_blocking(self.frames, False)
        os.set_blocking(self.chatter, False)

    def signal(self, number: int) -> None:
        """Send a signal to the worker and to everything in its group."""
        if self.wait_status is None:  # not yet reaped, so the number still is the worker's
            with contextlib.suppress(OSError):
                os.kill(self.pid, number)  # it may not have got as far as to lead its group
        with contextlib.suppress(OSError):
            os.killpg(self.pid, number)

    def ended(self) -> bool:
        """Whether the worker is gone; never waits."""
        if self.wait_status is None:
            try:
                pid, status = os.waitpid(self.pid, os.WNOHANG)
            except ChildProcessError:  # somebody reaps every child (SIGCHLD ignored)
                pid, status = self.pid, 0
            if pid:
                self.wait_status = status
        return self.wait_status is not None

    def end(self, patience: float = 10.0) -> bool:
        """Kill the group and wait until the worker is gone; False if it is stuck in the system."""
        self.signal(signal.SIGKILL)
        limit = time.monotonic() + patience
        pause = 0.0001
        while not self.ended():
            if time.monotonic() > limit:
                return False
            time.sleep(pause)
            pause = min(2 * pause, 0.01)
        self.signal(signal.SIGKILL)  # what the worker may have started since
        return True

    def close(self) -> None:
        """Give the descriptors back."""
        os.close(self.frames)
        os.close(self.chatter)


def carry_out(job: Job, send: Callable[[Kind, bytes], None]) -> None:
    """Run the job and send how it ended; an error on purpose has its own ending, any other is `BROKEN`."""
    channel = Channel(send)
    try:
        status = int(job(channel))
    except KeyboardInterrupt:  # only where the job runs in the caller's process
        raise
    except BaseException as error:
        kind, words = _ending_by(error, channel)
    else:
        kind, words = Kind.EXIT, b"%d" % status
    with contextlib.suppress(OSError, ValueError, AttributeError):
        sys.stdout.flush()
        sys.stderr.flush()
    send(kind, words)


def _ending_by(error: BaseException, channel: Channel) -> tuple[Kind, bytes]:
    if isinstance(error, MemoryError) or (isinstance(error, OSError) and error.errno == errno.ENOMEM):
        return Kind.OUT_OF_MEMORY, b""
    if isinstance(error, SystemExit) and isinstance(error.code, int | None):
        return Kind.EXIT, b"%d" % (error.code or 0)
    from symplant.errors import BudgetError, InputError, UndecidedError

    if isinstance(error, InputError):
        channel.err("".join(f"symplant: {fault}\n" for fault in error.faults))
        return Kind.EXIT, b"2"
    if isinstance(error, UndecidedError):
        channel.err(f"symplant: {error}\n")
        return Kind.EXIT, b"3"
    if isinstance(error, BudgetError):
        return Kind.STOPPED, to_bytes(str(error))
    if os.environ.get("SYMPLANT_TRACEBACK") == "1":
        import traceback

        channel.err("".join(traceback.format_exception(error)))
    return Kind.BROKEN, to_bytes(_in_one_line(error))


def _work(job: Job, frames: int, chatter: int, parent: int, max_memory: int | None) -> NoReturn:
    try:
        os.setsid()
        default_handling()
        _end_with(parent)
        _limit(max_memory)
        os.dup2(chatter, 1)
        os.dup2(chatter, 2)
        # Whatever the streams were before (a test may have replaced them), prints now go where fd 2 goes.
        printed = io.BufferedWriter(io.FileIO(2, "w", closefd=False))
        sys.stdout = sys.stderr = io.TextIOWrapper(printed, "utf-8", "backslashreplace", line_buffering=True)
        carry_out(job, frame_sender(frames))
        with contextlib.suppress(OSError, ValueError):
            sys.stderr.flush()
    finally:
        os._exit(0)  # never back into the parent's code, whatever happened


def _end_with(parent: int) -> None:
    """Have the kernel end this process when its parent dies (Linux); the guard does it for the group."""
    if not sys.platform.startswith("linux"):
        return
    try:
        import ctypes

        ctypes.CDLL(None).prctl(_PR_SET_PDEATHSIG, int(signal.SIGKILL), 0, 0, 0)
    except (ImportError, OSError, AttributeError):
        return
    if os.getppid() != parent:  # it died before the call
        os._exit(0)


def _limit(max_memory: int | None) -> None:
    """No core files; and a hard stop some way above the budget, in case the parent is late to look."""
    import resource

    with contextlib.suppress(OSError, ValueError):
        resource.setrlimit(resource.RLIMIT_CORE, (0, 0))
    if max_memory is None:
        return
    ceiling = max_memory + max_memory // 4 + _DATA_SLACK
    with contextlib.suppress(OSError, ValueError, OverflowError):
        _, hard = resource.getrlimit(resource.RLIMIT_DATA)
        if hard == resource.RLIM_INFINITY or hard > ceiling:
            resource.setrlimit(resource.RLIMIT_DATA, (ceiling, hard))
    # A numerical library reserves tens of megabytes for each thread, and dies where it does not get them.
    for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS"):
        os.environ.setdefault(name, "1")


def _in_one_line(error: BaseException) -> str:
    try:
        words = " ".join(str(error).split())
    except Exception:
        words = ""
    if len(words) > 300:
        words = words[:300] + "..."
    return f"unexpected {type(error).__name__}" + (f": {words}" if words else "")


def _fill_standard_descriptors() -> None:
    """Make sure that 0, 1 and 2 are taken, so that no pipe of ours gets one of these numbers."""
    while (descriptor := os.open(os.devnull, os.O_RDWR)) <= 2:
        pass
    os.close(descriptor)
