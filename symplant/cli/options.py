"""Types for command line options, and the options that every command has."""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from fractions import Fraction
from typing import Any, TypeVar

import click

__all__ = ["SECONDS", "SIZE", "SecondsType", "SizeType", "budget_options"]

_Command = TypeVar("_Command", bound=Callable[..., Any])

_UNITS = {"": 1, "B": 1} | {
    letter + kind: base**power
    for power, letter in enumerate("KMGT", start=1)
    for kind, base in (("B", 1000), ("IB", 1024))
}
_SIZE = re.compile(r"\s*(\d+(?:\.\d+)?|\.\d+)\s*([A-Za-z]*)\s*", re.ASCII)


class SizeType(click.ParamType):  # type: ignore[type-arg]  # generic only since click 8.5
    """An amount of memory in bytes: `500MB`, `2GB` (powers of 1000), `1.5GiB` (powers of 1024), `800000000`.

    >>> [SIZE.convert(text, None, None) for text in ("500MB", "1.5GiB", "2 gb", "4096")]
    [500000000, 1610612736, 2000000000, 4096]
    """

    name = "size"

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> int:
        """The number of bytes."""
        if isinstance(value, int):
            return value
        found = _SIZE.fullmatch(value)
        if found is None:
            self.fail(
                f"{value!r} is not an amount of memory; write it as 500MB, 2GB, 1.5GiB or in bytes.",
                param,
                ctx,
            )
        number, unit = found.groups()
        if unit.upper() not in _UNITS:
            near = unit.upper()[:1]
            hint = f"{number}{near}B or {number}{near}iB" if near in set("KMGT") else "500MB, 2GB or 1.5GiB"
            self.fail(f"{value!r} has no known unit of memory; write {hint}.", param, ctx)
        size = int(Fraction(number) * _UNITS[unit.upper()])
        if size <= 0:
            self.fail(f"{value!r} is no memory at all; give more than zero.", param, ctx)
        return size


class SecondsType(click.ParamType):  # type: ignore[type-arg]
    """A time in seconds above zero.

    >>> SECONDS.convert("0.5", None, None)
    0.5
    """

    name = "seconds"

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> float:
        """The time in seconds."""
        try:
            seconds = float(value)
        except ValueError:
            self.fail(f"{value!r} is not a number of seconds; write it as 30 or 0.5.", param, ctx)
        if not (math.isfinite(seconds) and seconds > 0):
            self.fail(f"{value!r} is not a time above zero; leave the option out for no limit.", param, ctx)
        return seconds


SIZE = SizeType()
SECONDS = SecondsType()


def budget_options(command: _Command) -> _Command:
    """Give a command `--max-seconds` (a float) and `--max-memory` (bytes, an int); None where left out."""
    command = click.option(
        "--max-memory",
        type=SIZE,
        metavar="SIZE",
        help="Stop when more memory than this is in use (500MB, 2GB, 1.5GiB).",
    )(command)
    return click.option(
        "--max-seconds",
        type=SECONDS,
        metavar="N",
        help="Stop after this time; what was finished by then is printed.",
    )(command)
