"""Where no process can be forked (Windows): the job runs in the caller's own process."""

from __future__ import annotations

import os
import threading
from collections.abc import Callable

from symplant.cli.supervision.channel import Kind
from symplant.cli.supervision.ending import OnStop, Stop, conclude, diagnose, interrupted, out_of_time
from symplant.cli.supervision.ledger import Ledger
from symplant.cli.supervision.outlet import Outlet
from symplant.cli.supervision.worker import Job, carry_out

__all__ = ["run_in_process"]


def run_in_process(
    job: Job,
    max_seconds: float | None,
    max_memory: int | None,
    on_stop: OnStop | None,
    out: Outlet,
    err: Outlet,
) -> int:
    """Run the job here; a thread ends the whole process when the time is up.

    Weaker than a worker of its own: a library call that keeps the interpreter to itself delays both the
    end by time and Ctrl-C until it returns, and a memory budget cannot be held, which is said on
    standard error. Returns the exit status.
    """
    lock = threading.Lock()
    ledger = Ledger(_straight(out), _straight(err))
    if max_memory is not None:
        _straight(err)(b"symplant: --max-memory has no effect on this system.\n")

    def send(kind: Kind, payload: bytes) -> None:
        with lock:
            ledger.take(kind, payload)

    def say(stop: Stop) -> int:
        text, sentence = conclude(ledger, stop, on_stop)
        _straight(out)(text)
        ledger.tidy()
        _straight(err)(sentence)
        return stop.status

    def expire() -> None:
        assert max_seconds is not None
        if not finished.wait(max_seconds):
            with lock:
                os._exit(say(out_of_time(max_seconds)))

    finished = threading.Event()
    if max_seconds is not None:
        threading.Thread(target=expire, daemon=True).start()
    try:
        carry_out(job, send)
    except KeyboardInterrupt:
        return say(interrupted(2))
    finally:
        finished.set()
    with lock:
        if ledger.status is None:
            return say(diagnose(ledger, 0, b"", max_memory, 0))
        if out.gone and not out.fault:
            return 141
        ledger.tidy()
        return ledger.status


def _straight(outlet: Outlet) -> Callable[[bytes], None]:
    """Write at once, waiting as long as it takes."""

    def write(data: bytes) -> None:
        outlet.put(data)
        while outlet.pending:
            outlet.write_some()

    return write
