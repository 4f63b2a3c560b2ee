"""A program for the tests of supervised work: runs one of the jobs below under a budget.

    python supervised_jobs.py JOB MARKER KEYWORDS(JSON) [FOLDER]

MARKER stands in the command line of every process of the run, so that a test can look for strays.
When the work is over it writes to standard error: the time that passed, the processor time used by all
processes, and the heavy libraries that the parent has loaded.
"""

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

from symplant.cli.budget import Channel, run_supervised

MARKER = sys.argv[2] if len(sys.argv) > 4 else ""  # collected by pytest, it is no program
FOLDER = Path(sys.argv[4]) if len(sys.argv) > 4 else Path()


def _power_sum(exponent):
    from flint import Ordering, fmpz_mpoly_ctx

    context = fmpz_mpoly_ctx.get(("x", 8), Ordering.lex)
    return sum(context.gens(), start=context.constant(1)) ** exponent


def _long_call():
    """One FLINT call of many minutes that holds the interpreter and little memory."""
    from flint import fmpz

    fmpz((2**127 - 1) * (10**40 + 121) * (10**45 + 9)).factor()


def _start_helper():
    """A child of the worker, as a job might start for a second opinion."""
    return subprocess.Popen([sys.executable, "-c", "import time; time.sleep(600)", MARKER])


def answer(channel: Channel) -> int:
    channel.out("first line\n")
    channel.out("bytes \udcff and é\n")
    channel.err("a remark\n")
    print("printed by a library")
    return 1


def loads_flint(channel: Channel) -> int:
    channel.out(f"{_power_sum(2).total_degree()}\n")
    return 0


def trivial(channel: Channel) -> int:
    channel.out("s\n")
    return 0


def long_product(channel: Channel) -> int:
    channel.plan(["poles", "zeros", "report"])
    channel.stage("poles")
    channel.keep("poles: -1, -2")
    half = _power_sum(18)
    channel.stage("zeros")
    channel.err("ready\n")
    half * half
    return 0


def long_after_answer(channel: Channel) -> int:
    channel.keep("kept and then answered")
    channel.out('{"whole": true}\n')
    _long_call()
    return 0


def flint_memory(channel: Channel) -> int:
    channel.plan(["determinant", "zeros"])
    channel.stage("determinant")
    _power_sum(40)
    return 0


def bytearray_memory(channel: Channel) -> int:
    held = []
    while True:
        held.append(bytearray(b"x" * 5_000_000))
        time.sleep(0.005)


def one_big_bytearray(channel: Channel) -> int:
    return len(bytearray(1 << 45))


def helper_memory(channel: Channel) -> int:
    held = "import time; held = b'x' * 200_000_000; time.sleep(600)"
    with subprocess.Popen([sys.executable, "-c", held, MARKER]) as helper:
        return helper.wait()


def shared_memory(channel: Channel) -> int:
    """150 MB held by three processes together, copied by none of them."""
    held = b"x" * 150_000_000
    children = []
    for _ in range(2):
        child = os.fork()
        if child == 0:
            time.sleep(0.5)
            os._exit(0)
        children.append(child)
    for child in children:
        os.waitpid(child, 0)
    channel.out(f"{len(held)}\n")
    return 0


def flint_refused(channel: Channel) -> int:
    """The system refuses memory to FLINT, which then prints a message of its own and aborts."""
    import resource

    channel.stage("determinant")
    resource.setrlimit(resource.RLIMIT_DATA, (200_000_000, 200_000_000))
    _power_sum(40)
    return 0


def long_with_helper(channel: Channel) -> int:
    from symplant.writing.files import staged_folder

    _start_helper()
    with staged_folder(FOLDER / "report", channel) as folder:
        (folder / "half.tex").write_text("half", encoding="utf-8")
        channel.stage("factors")
        channel.keep("poles: -1, -2")
        time.sleep(0.2)
        channel.err("ready\n")
        _long_call()
    return 0


def killed_while_moving(channel: Channel) -> int:
    """The worker is taken away after two of five files have been moved."""
    from symplant.writing import files

    plain, moved = Path.replace, []

    def replace(self, goal):
        if len(moved) == 2:
            os.kill(os.getpid(), signal.SIGKILL)
        moved.append(goal)
        return plain(self, goal)

    with files.staged_folder(FOLDER / "report", channel) as folder:
        for number in range(5):
            (folder / f"{number}.tex").write_text("new", encoding="utf-8")
        Path.replace = replace
    return 0


def leaves_helper_behind(channel: Channel) -> int:
    _start_helper()
    channel.out("done\n")
    return 0


def one_big_text(channel: Channel) -> int:
    channel.out("0123456789abcde\n" * (50_000_000 // 16))
    return 0


def many_small_texts(channel: Channel) -> int:
    for number in range(200_000):
        channel.out(f"{number}\n")
    return 0


def big_text_then_long(channel: Channel) -> int:
    channel.out("0123456789abcde\n" * 1_000_000)
    channel.err("ready\n")
    _long_call()
    return 0


def crash(channel: Channel) -> int:
    channel.stage("zeros")
    os.write(2, b"Segment register in disarray\n")
    os.kill(os.getpid(), signal.SIGSEGV)
    return 0


def vanishes(channel: Channel) -> int:
    os._exit(0)


def raises(channel: Channel) -> int:
    channel.plan(["poles", "zeros"])
    channel.stage("poles")
    raise ValueError("no such\nroot")


def input_at_fault(channel: Channel) -> int:
    from symplant.errors import Fault, InputError

    raise InputError([Fault("time", "unknown value"), Fault("matrices.A", "not square", "3 rows")])


def undecided(channel: Channel) -> int:
    from symplant.errors import UndecidedError

    raise UndecidedError("is a0 positive")


def own_budget(channel: Channel) -> int:
    from symplant.errors import BudgetError

    channel.keep("poles")
    raise BudgetError("more than 10**6 terms")


def interpreter_loop(channel: Channel) -> int:
    channel.stage("loop")
    channel.keep("poles")
    while True:
        time.sleep(0.01)


def counts_time(channel: Channel) -> int:
    """Writes to a file as long as it runs."""
    channel.err("ready\n")
    with (FOLDER / "ticks").open("a") as file:
        for _ in range(1000):
            file.write(".")
            file.flush()
            time.sleep(0.01)
    return 0


def as_json(finished, unfinished, reason, kept):
    return json.dumps({"finished": finished, "unfinished": unfinished, "reason": reason, "kept": kept})


def fails_to_tell(finished, unfinished, reason, kept):
    raise KeyError("no title")


if __name__ == "__main__":
    signal.signal(signal.SIGINT, signal.default_int_handler)  # a test run in the background ignores it
    keywords = json.loads(sys.argv[3])
    on_stop = {"as_json": as_json, "fails_to_tell": fails_to_tell, None: None}[keywords.pop("on_stop", None)]
    if keywords.pop("without_fork", False):
        del os.fork
    began, used = time.monotonic(), sum(os.times()[:4])
    status = run_supervised(globals()[sys.argv[1]], on_stop=on_stop, **keywords)
    loaded = [name for name in ("flint", "numpy", "sympy", "ctypes") if name in sys.modules]
    if os.environ.get("TELL_ELAPSED"):
        sys.stderr.write(
            f"elapsed {time.monotonic() - began:.3f} used {sum(os.times()[:4]) - used:.3f} loaded {loaded}\n"
        )
        sys.stderr.flush()
    sys.exit(status)
