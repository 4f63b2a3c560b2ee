"""What every command shares: its arguments, the supervised run, and faults told the same way."""

from __future__ import annotations

import json
import os
import shutil
import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any, TypeVar

import click

from symplant.cli.budget import Channel, run_supervised
from symplant.cli.faults import faults_json, faults_text
from symplant.cli.options import budget_options
from symplant.errors import InputError

__all__ = ["Session", "plant_command"]

Function = TypeVar("Function", bound=Callable[..., Any])

#: Widest page of running text; formulas may use the terminal's width up to this.
WIDEST = 120


def plant_command(function: Function) -> Function:
    """Give a command the plant file, `--json` and the budgets."""
    function = budget_options(function)
    function = click.option(
        "--json",
        "as_json",
        is_flag=True,
        help="Give a machine answer on standard output, nothing else there.",
    )(function)
    return click.argument("plant", type=click.Path(path_type=Path, exists=False), metavar="PLANT.toml")(
        function
    )


@dataclass(frozen=True)
class Session:
    """One run of one command on one plant file."""

    command: str
    plant: Path
    as_json: bool = False
    max_seconds: float | None = None
    max_memory: int | None = None

    def run(self, work: Callable[[Channel], int]) -> int:
        """Run `work` under the budgets; the exit status of the program."""

        def job(channel: Channel) -> int:
            try:
                return work(channel)
            except InputError as error:
                if self.as_json:
                    channel.out(faults_json(self.command, error.faults))
                else:
                    channel.err(faults_text(error.faults, str(self.plant)))
                return 2

        return run_supervised(
            job,
            max_seconds=self.max_seconds,
            max_memory=self.max_memory or _most_memory(),
            on_stop=self._stopped if self.as_json else None,
        )

    def _stopped(self, finished: list[str], unfinished: list[str], reason: str, kept: list[str]) -> str:
        """The machine answer of a run that was stopped: what was found, and what was not."""
        answer: dict[str, Any] = {"format": 1, "command": self.command}
        for part in kept:
            for key, value in json.loads(part).items():
                if isinstance(value, list):
                    answer.setdefault(key, []).extend(value)
                else:
                    answer[key] = value
        answer["stopped"] = {"because": reason, "finished": finished, "unfinished": unfinished}
        return dump(answer)


def _most_memory() -> int | None:
    """Without a budget: most of what is free, in bytes, so that no derivation takes the machine down.

    None where the system does not tell (then its own limits hold).
    """
    try:
        lines = Path("/proc/meminfo").read_text(encoding="ascii").splitlines()
        free = next(line for line in lines if line.startswith("MemAvailable:"))
        return int(free.split()[1]) * 1024 * 4 // 5
    except (OSError, StopIteration, ValueError, IndexError):
        return None


def dump(answer: dict[str, Any]) -> str:
    """A machine answer as text."""
    return json.dumps(answer, indent=2, ensure_ascii=False) + "\n"


def page_width() -> int:
    """Columns to write in: the terminal's, within reason; 100 where there is none."""
    if not sys.stdout.isatty():
        return 100
    return max(60, min(shutil.get_terminal_size((100, 40)).columns, WIDEST))


def wants_colour() -> bool:
    """Whether standard output is a terminal that may be given colours (https://no-color.org)."""
    return sys.stdout.isatty() and "NO_COLOR" not in os.environ and os.environ.get("TERM") != "dumb"


def speaks_unicode() -> bool:
    """Whether standard output can hold mathematical signs."""
    try:
        "²₁Δ−·√ωζ".encode(sys.stdout.encoding or "ascii")
    except (UnicodeEncodeError, LookupError):
        return False
    return True
