"""Work under a budget of time and memory, in a process that can be ended at any moment.

The exact libraries below stay inside one call for as long as it takes, and no signal handler written in
Python runs meanwhile. So the work is done by a worker process, and its parent, which loads none of these
libraries, only watches: it passes text on, looks at the clock and at the memory, and ends the worker
with everything that this one started when it has to.
"""

from __future__ import annotations

import os
import select
import sys
import time

from symplant.cli.supervision.channel import Channel, FrameReader, to_bytes
from symplant.cli.supervision.ending import (
    OnStop,
    Stop,
    conclude,
    diagnose,
    interrupted,
    out_of_memory,
    out_of_time,
)
from symplant.cli.supervision.guard import Guard
from symplant.cli.supervision.interruptions import Interruptions
from symplant.cli.supervision.ledger import Ledger
from symplant.cli.supervision.memory import MemoryWatch
from symplant.cli.supervision.outlet import Outlet, ProgressLine
from symplant.cli.supervision.worker import Job, Worker

__all__ = ["Channel", "Job", "OnStop", "run_supervised"]

_TICK = 0.05  # seconds: the longest time in which a signal or a silent death goes unnoticed
_BROKEN_PIPE = 128 + 13  # what a shell reports for a program that SIGPIPE ended (common practice)
_OUTPUT_FAULT = 74  # EX_IOERR of sysexits.h (common practice)
_SYSTEM_FAULT = 71  # EX_OSERR of sysexits.h (common practice)
_CHATTER_KEPT = 1 << 16  # bytes
_READ_CHUNK = 1 << 20  # bytes


def run_supervised(
    job: Job,
    *,
    max_seconds: float | None = None,
    max_memory: int | None = None,
    progress: bool = True,
    on_stop: OnStop | None = None,
) -> int:
    """Run `job` where it can be stopped; the exit status for the whole program.

    job: called with a `Channel`, in a forked process; what it returns is the exit status
    max_seconds: wall-clock time; the time spent stopped by Ctrl-Z is not counted
    max_memory: bytes of resident memory of the worker and all that it starts (looked at 50 times a
        second on Linux; elsewhere only the system's limit on the worker's own memory holds)
    progress: show what is being worked on, when standard error is a terminal
    on_stop: called with (finished, unfinished, reason, kept) when the work is stopped; its result goes
        to standard output in place of the kept parts (for an answer that must be one JSON document)

    Status besides the job's own: 2 an InputError left the job; 3 a budget ran out, Ctrl-C, or the worker was
    lost; 70 an unexpected exception (one sentence; a traceback with SYMPLANT_TRACEBACK=1 in the
    environment); 74 standard output cannot be written; 128 + n ended by another signal n, or by
    the reader of a pipe who left (141). Finished parts are put out and the rest is named in every case.

    Whatever happens to this process, SIGKILL included, no process of the work goes on and no staging
    place (see `symplant.writing.files`) is left. Where nothing can be forked (Windows) the job runs in
    this process: the time budget then acts only between calls into the libraries, the memory budget
    not at all.

    >>> def job(channel: Channel) -> int:
    ...     channel.out("s**2 + 1\\n")
    ...     return 0
    >>> run_supervised(job, max_seconds=60)
    s**2 + 1
    0
    """
    began = time.monotonic()
    out, err = Outlet(sys.stdout), Outlet(sys.stderr)
    if not hasattr(os, "fork"):
        from symplant.cli.supervision.in_process import run_in_process

        return run_in_process(job, max_seconds, max_memory, on_stop, out, err)
    with Interruptions() as interruptions:
        line = ProgressLine(sys.stderr, progress)
        try:
            watch = _Watch(job, max_memory, out, err, interruptions, line, began)
        except OSError as error:
            sys.stderr.write(f"symplant: no process can be started: {error.strerror or error}.\n")
            return _SYSTEM_FAULT
        try:
            stop = watch.until_end(max_seconds)
        finally:
            watch.clear_up()
        return watch.finish(stop, on_stop)


class _Watch:
    """The parent's side of one run."""

    def __init__(
        self,
        job: Job,
        max_memory: int | None,
        out: Outlet,
        err: Outlet,
        interruptions: Interruptions,
        line: ProgressLine,
        began: float,
    ) -> None:
        self._out, self._err, self._line, self._began = out, err, line, began
        self._interruptions = interruptions
        self._max_memory = max_memory
        self._ledger = Ledger(out.put, err.put)
        self._reader = FrameReader()
        self._chatter = b""
        self._troubles: list[str] = []
        self._worker = Worker(job, max_memory)
        self._open = [self._worker.frames, self._worker.chatter]
        interruptions.tell_worker = self._worker.signal
        self._memory = MemoryWatch(self._worker.pid, max_memory)
        try:
            self._guard = Guard(self._worker.pid)
        except OSError:
            self._worker.end()
            raise

    def until_end(self, max_seconds: float | None) -> Stop | None:
        """Watch until the worker has ended by itself (None) or has to be ended."""
        while True:
            now = time.monotonic()
            left = float("inf")
            if max_seconds is not None:
                left = self._began + max_seconds + self._interruptions.paused - now
                if left <= 0:
                    return out_of_time(max_seconds)
            if self._interruptions.received is not None:
                return interrupted(self._interruptions.received)
            if self._memory.exceeded():
                return out_of_memory(self._max_memory)
            if _lost(self._out):
                return self._unwritable()
            self._line.show(self._ledger.current, now - self._began - self._interruptions.paused)
            tick = _TICK if self._worker.frames in self._open else 0.001  # else it is about to be gone
            self._exchange(max(0.0, min(tick, left, self._memory.next_look - now)))
            if self._ledger.status is not None:
                return None
            if self._worker.ended():
                return None

    def clear_up(self) -> None:
        """Nothing of the work goes on after this, and no staging place is left."""
        gone = self._worker.end()
        while self._read():
            pass
        if gone:
            self._troubles += self._ledger.tidy()
        else:
            self._troubles.append(f"process {self._worker.pid} could not be ended")
        self._line.erase()
        self._interruptions.tell_worker = None
        self._guard.dismiss()
        self._open = []
        self._worker.close()

    def finish(self, stop: Stop | None, on_stop: OnStop | None) -> int:
        """Put out what is still to be said; the exit status."""
        ledger, sentence = self._ledger, b""
        if ledger.status is not None:
            stop = None  # it was done just before it would have been stopped
        elif stop is None and self._interruptions.received is not None:
            stop = interrupted(
                self._interruptions.received
            )  # sent to the worker as well, which died of it first
        elif stop is None:
            status = self._worker.wait_status or 0
            stop = diagnose(ledger, status, self._chatter, self._max_memory, self._memory.peak)
        if stop is not None and stop.reason:
            text, sentence = conclude(ledger, stop, on_stop)
            self._out.put(text)
        if stop is None or not stop.quiet:
            self._err.put(self._chatter)
        for trouble in self._troubles:
            self._err.put(to_bytes(f"symplant: {trouble}.\n"))
        self._err.put(sentence)
        return self._flush(stop.status if stop is not None else ledger.status or 0)

    def _flush(self, status: int) -> int:
        """Write until all is out, the reader is gone, or somebody asks (once more) for an end."""
        asked = self._interruptions.count
        while self._out.pending or self._err.pending:
            self._exchange(_TICK)
            if self._interruptions.count > asked and self._interruptions.received is not None:
                return 128 + self._interruptions.received
        if not _lost(self._out):
            return status
        stop = self._unwritable()
        if stop.reason and not self._err.gone:
            self._err.put(to_bytes(f"symplant: {stop.reason}.\n"))
            while self._err.pending and self._interruptions.count == asked:
                self._exchange(_TICK)
        return stop.status

    def _unwritable(self) -> Stop:
        fault = self._out.fault
        if fault is None:
            return Stop(_BROKEN_PIPE, "")
        return Stop(_OUTPUT_FAULT, f"standard output cannot be written: {fault.strerror or fault}")

    def _exchange(self, timeout: float) -> None:
        """Read what the worker says and write what is queued, without waiting longer than `timeout`."""
        outlets = (self._out, self._err)
        writers = {
            fd: outlet for outlet in outlets if outlet.pending and (fd := outlet.descriptor) is not None
        }
        ready = select.select(self._open, list(writers), [], timeout)
        if ready[0]:
            self._read()
        for descriptor in ready[1][
            :1
        ]:  # not both: the other may lead into the same pipe, which may be full now
            self._line.erase()
            writers[descriptor].write_some()

    def _read(self) -> bool:
        """Take in what stands in the worker's pipes; False when nothing did."""
        found = False
        for descriptor in tuple(self._open):
            try:
                data = os.read(descriptor, _READ_CHUNK)
            except BlockingIOError:
                continue
            if not data:
                self._open.remove(descriptor)
                continue
            found = True
            if descriptor == self._worker.chatter:
                self._chatter = (self._chatter + data)[-_CHATTER_KEPT:]
                continue
            for kind, payload in self._reader.feed(data):
                self._ledger.take(kind, payload)
                self._guard.pass_on(kind, payload)
        return found


def _lost(outlet: Outlet) -> bool:
    """Whether a stream that was there when the work began can no longer be written."""
    return outlet.gone and outlet.descriptor is not None
