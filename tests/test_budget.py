"""Supervised work on real processes: budgets, interruptions, output, and that nothing stays behind."""

import contextlib
import hashlib
import json
import os
import re
import select
import signal
import subprocess
import sys
import time
import uuid
from pathlib import Path

import pytest

PROGRAM = Path(__file__).with_name("supervised_jobs.py")
LATE = 4.0  # seconds within which a loaded machine must have done what takes a few milliseconds
HIDDEN_MESSAGES = re.compile("Traceback|FLINT|Exception|Aborted")


def _hear_signals():
    """A runner in the background, or under nohup, hands signals down as ignored; the jobs shall hear them."""
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        signal.signal(number, signal.SIG_DFL)


class Run:
    """One run of the program; `finish` waits for it and checks that no process of it is left."""

    def __init__(
        self, job, folder="", stdout=subprocess.PIPE, stderr=subprocess.PIPE, env=(), wrap=(), **keywords
    ):
        self.marker = f"marker-{uuid.uuid4().hex}"
        arguments = [sys.executable, str(PROGRAM), job, self.marker, json.dumps(keywords), str(folder)]
        environment = os.environ | {"TELL_ELAPSED": "1", "PYTHONPATH": str(PROGRAM.parent.parent)} | dict(env)
        self.process = subprocess.Popen(
            [*wrap, *arguments],
            stdout=stdout,
            stderr=stderr,
            stdin=subprocess.DEVNULL,
            env=environment,
            process_group=0,
            preexec_fn=_hear_signals,
        )

    def wait_until_ready(self):
        assert self.process.stderr.readline() == b"ready\n"
        time.sleep(0.3)  # from here on the job is inside its long call

    def finish(self):
        out, err = self.process.communicate(timeout=120)
        self.out = (out or b"").decode("utf-8", "surrogateescape")
        self.err = (err or b"").decode("utf-8", "surrogateescape")
        found = re.search(r"elapsed ([\d.]+) used ([\d.]+) loaded \[(.*)\]\n", self.err)
        if found:
            self.elapsed, self.used, self.loaded = float(found[1]), float(found[2]), found[3]
            self.err = self.err.replace(found[0], "")
        self.status = self.process.returncode
        assert gone(self.marker), processes(self.marker)
        return self


def processes(marker):
    if not Path("/proc/self/cmdline").exists():
        listing = subprocess.run(
            ["ps", "-axww", "-o", "pid=,args="], capture_output=True, text=True, check=True
        )
        return [line for line in listing.stdout.splitlines() if marker in line]
    found = []
    for entry in Path("/proc").glob("[0-9]*/cmdline"):
        with contextlib.suppress(OSError):  # it ended while we looked
            if marker.encode() in entry.read_bytes():
                found.append(entry.parent.name)
    return found


def gone(marker):
    limit = time.monotonic() + LATE
    while processes(marker):
        if time.monotonic() > limit:
            return False
        time.sleep(0.02)
    return True


def hidden(folder):
    return [path.name for path in Path(folder).rglob(".*")]


# What a job says, and how it ends


def test_status_and_texts_come_through():
    run = Run("answer").finish()
    assert run.status == 1
    assert run.out == "first line\nbytes \udcff and é\n"
    assert run.err == "a remark\nprinted by a library\n"


def test_parent_loads_no_heavy_library():
    run = Run("loads_flint", max_seconds=60, max_memory=10**9).finish()
    assert (run.out, run.status, run.loaded) == ("2\n", 0, "")


def test_small_job_costs_little():
    # Measured: 5 ms, by the clock and of processor time. The bounds leave room for a loaded machine, on
    # which the clock also counts the turns of others.
    runs = [Run("trivial", max_seconds=60).finish() for _ in range(5)]
    assert min(run.used for run in runs) <= 0.03
    assert min(run.elapsed for run in runs) < 0.3


@pytest.mark.parametrize("job", ["crash", "vanishes"])
def test_crash_is_told_in_one_sentence(job):
    run = Run(job).finish()
    assert run.status == 3
    assert run.err.count("\n") == 1 and "please report it" in run.err
    if job == "crash":
        assert "SIGSEGV, Segment register in disarray" in run.err and run.err.endswith(
            "not finished: zeros.\n"
        )


def test_unexpected_exception_is_one_sentence():
    run = Run("raises").finish()
    assert run.status == 70
    assert run.err.count("\n") == 1
    assert run.err.startswith("symplant: unexpected ValueError: no such root; please report it")
    assert run.err.endswith("finished: nothing; not finished: poles, zeros.\n")


def test_developers_may_see_the_traceback():
    run = Run("raises", env={"SYMPLANT_TRACEBACK": "1"}).finish()
    assert run.status == 70
    assert "Traceback" in run.err and 'raise ValueError("no such\\nroot")' in run.err


@pytest.mark.parametrize(
    ("job", "status", "words", "out"),
    [
        ("input_at_fault", 2, ["time: unknown value\n", "matrices.A: not square (3 rows)\n"], ""),
        ("undecided", 3, ["undecided: is a0 positive"], ""),
        ("own_budget", 3, ["stopped: more than 10**6 terms."], "poles\n"),
    ],
)
def test_errors_on_purpose_have_their_own_status(job, status, words, out):
    run = Run(job).finish()
    assert (run.status, run.out) == (status, out)
    assert all(part in run.err for part in words) and "report it" not in run.err


def test_helper_of_the_job_does_not_outlive_it():
    run = Run("leaves_helper_behind").finish()
    assert (run.status, run.out) == (0, "done\n")


# Budgets


def test_time_budget_holds_inside_one_flint_call():
    run = Run("long_product", max_seconds=1.5).finish()
    assert run.status == 3
    assert 1.5 <= run.elapsed < 1.5 + LATE  # measured: 1.52
    assert run.out == "poles: -1, -2\n"
    assert run.err == (
        "ready\nsymplant: stopped because the time budget of 1.5 s ran out;"  # and no progress line in a pipe
        " finished: poles; not finished: zeros, report.\n"
    )


def test_stop_can_be_answered_in_json():
    run = Run("long_product", max_seconds=1.0, on_stop="as_json").finish()
    assert run.status == 3
    assert json.loads(run.out) == {
        "finished": ["poles"],
        "unfinished": ["zeros", "report"],
        "reason": "stopped because the time budget of 1 s ran out",
        "kept": ["poles: -1, -2"],
    }


@pytest.mark.parametrize("on_stop", [None, "as_json"])
def test_an_answer_already_given_is_not_followed_by_another(on_stop):
    run = Run("long_after_answer", max_seconds=0.5, on_stop=on_stop).finish()
    assert (run.status, run.out) == (3, '{"whole": true}\n')


def test_stop_that_cannot_be_answered_is_told():
    run = Run("interpreter_loop", max_seconds=0.2, on_stop="fails_to_tell").finish()
    assert (run.status, run.out) == (3, "")
    assert "could not be put out (KeyError" in run.err and "Traceback" not in run.err


@pytest.mark.parametrize("job", ["flint_memory", "bytearray_memory", "one_big_bytearray", "helper_memory"])
def test_memory_budget_holds(job):
    run = Run(job, max_memory=120_000_000, max_seconds=60).finish()
    assert run.status == 3
    assert run.err.startswith("symplant: stopped because the memory budget of 120 MB ran out")
    assert not HIDDEN_MESSAGES.search(run.err) and run.err.count("\n") == 1
    if job == "flint_memory":
        assert run.err.endswith("; finished: nothing; not finished: determinant, zeros.\n")


def test_memory_shared_between_processes_counts_once():
    run = Run("shared_memory", max_memory=250_000_000).finish()
    assert (run.status, run.out, run.err) == (0, "150000000\n", "")


@pytest.mark.parametrize("max_memory", [None, 10**9])
def test_memory_refused_to_flint_is_told_in_our_words(max_memory):
    run = Run("flint_refused", max_memory=max_memory).finish()
    assert run.status == 3
    assert re.search("memory budget of 1 GB ran out|the system had no more memory to give", run.err)
    assert not HIDDEN_MESSAGES.search(run.err)


# Interruptions


@pytest.mark.parametrize(
    ("number", "status", "reason"),
    [
        (signal.SIGINT, 3, "interrupted"),
        (signal.SIGTERM, 143, "stopped by SIGTERM"),
        (signal.SIGHUP, 129, "stopped by SIGHUP"),
    ],
)
def test_interruption_ends_everything(tmp_path, number, status, reason):
    run = Run("long_with_helper", tmp_path, max_seconds=600)
    run.wait_until_ready()
    sent = time.monotonic()
    os.killpg(run.process.pid, number)  # as a terminal does
    run.finish()
    assert time.monotonic() - sent < LATE
    assert (run.status, run.out) == (status, "poles: -1, -2\n")
    assert run.err == f"symplant: {reason}; finished: nothing; not finished: factors.\n"
    assert list(tmp_path.iterdir()) == []


def test_signal_to_every_process_at_once(tmp_path):
    run = Run("long_with_helper", tmp_path)
    run.wait_until_ready()
    for pid in processes(run.marker):
        os.kill(int(pid), signal.SIGTERM)
    run.finish()
    assert run.status in (3, 143)  # which of the two died first is left to the system
    assert "finished: nothing; not finished: factors.\n" in run.err and "report it" not in run.err
    assert list(tmp_path.iterdir()) == []


def test_signal_that_was_ignored_stays_ignored():
    run = Run("long_product", max_seconds=1.5, wrap=["sh", "-c", 'trap "" HUP; exec "$@"', "sh"])
    run.wait_until_ready()
    os.kill(run.process.pid, signal.SIGHUP)
    run.finish()
    assert run.status == 3 and "the time budget of 1.5 s ran out" in run.err


def test_killed_parent_takes_everything_along(tmp_path):
    run = Run("long_with_helper", tmp_path)
    run.wait_until_ready()
    assert hidden(tmp_path) and len(processes(run.marker)) == 4  # parent, guard, worker and its helper
    run.process.kill()
    run.finish()
    assert run.status == -signal.SIGKILL
    assert list(tmp_path.iterdir()) == []  # the guard clears up where the parent cannot


def test_worker_killed_from_outside_is_told():
    run = Run("long_product")
    run.wait_until_ready()
    children = subprocess.check_output(
        ["cat", f"/proc/{run.process.pid}/task/{run.process.pid}/children"]
    ).split()
    sessions = {
        int(pid): Path(f"/proc/{int(pid)}/stat").read_text().rsplit(")", 1)[1].split() for pid in children
    }
    worker = max(sessions, key=lambda pid: int(sessions[pid][11]))  # the one that used processor time
    os.kill(worker, signal.SIGKILL)
    run.finish()
    assert run.status == 3
    assert (
        "ended from outside (SIGKILL)" in run.err
        and "finished: poles; not finished: zeros, report" in run.err
    )


def test_pause_stops_the_worker_and_its_clock(tmp_path):
    run = Run("counts_time", tmp_path, max_seconds=2.0)
    run.wait_until_ready()
    os.kill(run.process.pid, signal.SIGTSTP)
    time.sleep(0.5)
    ticks = (tmp_path / "ticks").stat().st_size
    time.sleep(2.2)  # longer than the whole budget
    assert (tmp_path / "ticks").stat().st_size == ticks > 0
    os.kill(run.process.pid, signal.SIGCONT)
    run.finish()
    assert run.status == 3 and run.elapsed > 4.5
    assert (tmp_path / "ticks").stat().st_size > ticks + 20


def test_ctrl_c_at_a_terminal_and_the_progress_line():
    import pty

    marker = f"marker-{uuid.uuid4().hex}"
    pid, terminal = pty.fork()
    if pid == 0:
        os.environ["PYTHONPATH"] = str(PROGRAM.parent.parent)
        os.environ["TERM"] = "xterm"
        os.execv(sys.executable, [sys.executable, str(PROGRAM), "long_product", marker, '{"progress": true}'])
    seen = read_until(terminal, rb"working: zeros \(\d+ s\)\x1b\[K\rworking: zeros \(\d+ s\)\x1b\[K")
    os.write(terminal, b"\x03")
    seen = read_until(terminal, rb"not finished: zeros, report\.")
    _, status = os.waitpid(pid, 0)
    os.close(terminal)
    assert os.waitstatus_to_exitcode(status) == 3
    assert b"\r\x1b[K" in seen.split(b"poles: -1, -2")[0]  # erased before the next word
    assert b"working" not in seen.split(b"poles: -1, -2")[1]
    assert gone(marker)


def read_until(terminal, pattern):
    seen, limit = b"", time.monotonic() + 60
    while not re.search(pattern, seen):
        assert time.monotonic() < limit, seen
        if select.select([terminal], [], [], 1)[0]:
            seen += os.read(terminal, 4096)
    return seen


# Output that is large, stuck or unwanted


def test_fifty_megabytes_through_a_pipe():
    run = Run("one_big_text").finish()
    expected = "0123456789abcde\n" * (50_000_000 // 16)
    assert run.status == 0
    assert hashlib.sha256(run.out.encode()).digest() == hashlib.sha256(expected.encode()).digest()


def test_many_small_texts_keep_their_order(tmp_path):
    with (tmp_path / "out").open("wb") as file:
        assert Run("many_small_texts", stdout=file).finish().status == 0
    assert (tmp_path / "out").read_text() == "".join(f"{number}\n" for number in range(200_000))


@pytest.mark.parametrize("job", ["one_big_text", "big_text_then_long"])
def test_reader_that_leaves_early(job):
    run = Run(job)
    assert run.process.stdout.readline() == b"0123456789abcde\n"
    run.process.stdout.close()
    run.process.stdout = None
    run.finish()
    assert run.status == 141
    assert run.err.replace("ready\n", "") == ""


@pytest.mark.parametrize("cause", ["time", "interrupt"])
def test_reader_that_does_not_read_cannot_hold_up_the_end(cause):
    run = Run("big_text_then_long", **({"max_seconds": 1.0} if cause == "time" else {}))
    run.wait_until_ready()
    if cause == "time":
        assert run.process.stderr.readline().startswith(b"symplant: stopped because the time budget of 1 s")
    else:
        os.kill(run.process.pid, signal.SIGINT)
        assert run.process.stderr.readline().startswith(b"symplant: interrupted")
    assert len(processes(run.marker)) == 1  # the work is over, the text still waits for its reader
    os.kill(run.process.pid, signal.SIGINT)
    run.process.wait(timeout=LATE)
    assert run.process.returncode == 130
    run.finish()


def test_full_disk_is_told():
    with Path("/dev/full").open("wb") as full:
        run = Run("big_text_then_long", stdout=full).finish()
    assert run.status == 74
    assert "symplant: standard output cannot be written: No space left on device" in run.err


def test_closed_standard_streams_do_no_harm(tmp_path):
    script = f'exec "$@" >&- 2>"{tmp_path}/err" <&-'
    run = Run("answer", stdout=None, stderr=None, wrap=["sh", "-c", script, "sh"]).finish()
    assert run.status == 1
    assert (tmp_path / "err").read_text().startswith("a remark\nprinted by a library\n")


# Where nothing can be forked


def test_without_fork_the_job_still_runs():
    run = Run("answer", without_fork=True, max_seconds=30, max_memory=10**9).finish()
    assert run.status == 1
    assert "first line\nbytes \udcff and é\n" in run.out
    assert "--max-memory has no effect on this system" in run.err


def test_without_fork_time_ends_it_between_calls():
    run = Run("interpreter_loop", without_fork=True, max_seconds=0.3).finish()
    assert (run.status, run.out) == (3, "poles\n")
    assert run.err == (
        "symplant: stopped because the time budget of 0.3 s ran out; finished: nothing; not finished: loop.\n"
    )
