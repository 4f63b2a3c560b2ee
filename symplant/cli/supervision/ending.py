"""How supervised work ended, in words: one plain sentence and an exit status."""

from __future__ import annotations

import os
import re
import signal
from collections.abc import Callable
from typing import NamedTuple

from symplant.cli.supervision.channel import Kind, to_bytes
from symplant.cli.supervision.ledger import Ledger

__all__ = ["OnStop", "Stop", "conclude", "diagnose", "interrupted", "out_of_memory", "out_of_time"]

_STOPPED = 3  # a budget ran out, or the worker was lost
_SOFTWARE_FAULT = 70  # EX_SOFTWARE of sysexits.h (common practice)

OnStop = Callable[[list[str], list[str], str, list[str]], str]

_REPORT = "please report it together with the command and its input"
_MEMORY_WORDS = re.compile(
    rb"(unable|cannot|can't|could not|failed) (to )?(re)?allocate"
    rb"|memory_manager|bad_alloc|out of memory|MemoryError",
    re.IGNORECASE,
)


class Stop(NamedTuple):
    """Why the work has no regular end.

    reason: empty where nobody is left to read it
    quiet: what libraries printed is part of the reason, and not passed on besides
    """

    status: int
    reason: str
    quiet: bool = False


def out_of_time(seconds: float) -> Stop:
    """The time budget, in seconds, ran out.

    >>> out_of_time(2.0).reason
    'stopped because the time budget of 2 s ran out'
    """
    return Stop(_STOPPED, f"stopped because the time budget of {seconds:g} s ran out")


def out_of_memory(limit: int | None) -> Stop:
    """The memory budget, in bytes, ran out; without one, the machine's memory did.

    >>> out_of_memory(1_500_000_000).reason
    'stopped because the memory budget of 1.5 GB ran out'
    """
    if limit is None:
        return Stop(_STOPPED, "stopped because the system had no more memory to give", quiet=True)
    return Stop(_STOPPED, f"stopped because the memory budget of {_size(limit)} ran out", quiet=True)


def interrupted(number: int) -> Stop:
    """Somebody asked for an end by a signal.

    Ctrl-C is a budget that runs out in somebody's head: the same parts are put out, with the same status.

    >>> interrupted(signal.SIGINT)
    Stop(status=3, reason='interrupted', quiet=False)
    """
    if number == signal.SIGINT:
        return Stop(_STOPPED, "interrupted")
    return Stop(128 + number, f"stopped by {_signal_name(number)}")


def diagnose(ledger: Ledger, wait_status: int, chatter: bytes, limit: int | None, peak: int) -> Stop:
    """Why a worker ended that did not send its exit status.

    `chatter` is what it printed besides, `peak` the most memory in bytes that was seen.
    """
    if ledger.failure is not None:
        kind, words = ledger.failure
        if kind is Kind.OUT_OF_MEMORY:
            return out_of_memory(limit)
        if kind is Kind.STOPPED:
            return Stop(_STOPPED, f"stopped: {words}" if words else "stopped by a budget")
        return Stop(_SOFTWARE_FAULT, f"{words}; {_REPORT} (SYMPLANT_TRACEBACK=1 shows where it happened)")
    if not os.WIFSIGNALED(wait_status):
        status = os.waitstatus_to_exitcode(wait_status)
        return Stop(_STOPPED, f"the computation ended without an answer (exit status {status}); {_REPORT}")
    number = os.WTERMSIG(wait_status)
    if _MEMORY_WORDS.search(chatter) or (limit is not None and peak > 0.8 * limit):
        return out_of_memory(limit)
    if number == signal.SIGKILL:
        reason = (
            "the computation was ended from outside (SIGKILL), which the system does when memory runs out;"
            " --max-memory sets a limit below that"
        )
        return Stop(_STOPPED, reason)
    if number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        return Stop(_STOPPED, f"the computation was ended from outside ({_signal_name(number)})")
    return Stop(
        _STOPPED,
        f"the computation crashed ({_signal_name(number)}{_last_words(chatter)}); {_REPORT}",
        quiet=True,
    )


def conclude(ledger: Ledger, stop: Stop, on_stop: OnStop | None) -> tuple[bytes, bytes]:
    """What goes to standard output (finished parts) and to standard error (one sentence) after a stop."""
    sentence = f"symplant: {stop.reason}"
    if ledger.finished or ledger.unfinished:
        done = ", ".join(ledger.finished) or "nothing"
        sentence += f"; finished: {done}"
        if ledger.unfinished:
            sentence += f"; not finished: {', '.join(ledger.unfinished)}"
    parts = ledger.kept
    if on_stop is not None:
        # A machine answer is one document: where it was given already, a second one would spoil it.
        parts = []
        try:
            if not ledger.answered:
                parts = [on_stop(ledger.finished, ledger.unfinished, stop.reason, ledger.kept)]
        except Exception as error:
            sentence += f"; and what was finished could not be put out ({type(error).__name__}: {error})"
    text = "".join(part if part.endswith("\n") else part + "\n" for part in parts if part)
    return to_bytes(text), to_bytes(f"{sentence}.\n")


def _last_words(chatter: bytes) -> str:
    lines = [line.strip() for line in chatter.decode("utf-8", "replace").splitlines() if line.strip()]
    return ", " + " ".join(lines)[-200:] if lines else ""


def _signal_name(number: int) -> str:
    try:
        return signal.Signals(number).name
    except ValueError:
        return f"signal {number}"


def _size(number: int) -> str:
    for unit, name in ((10**12, "TB"), (10**9, "GB"), (10**6, "MB"), (10**3, "kB")):
        if number >= unit:
            return f"{number / unit:.4g} {name}"
    return f"{number} bytes" if number > 1 else "1 byte"
