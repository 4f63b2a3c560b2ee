"""`symplant hidden`: decoupling, invariant and transmission zeros, and where a mode hides."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

from symplant.cli.derive import Keeper, give_fragment
from symplant.cli.session import (
    Session,
    dump,
    page_width,
    plant_command,
    speaks_unicode,
    wants_colour,
)

if TYPE_CHECKING:
    from symplant.cli.budget import Channel

__all__ = ["hidden"]


@click.command(short_help="Modes that no input reaches or no output shows.")
@plant_command
@click.option("--latex", "as_latex", is_flag=True, help="Give LaTeX to paste or \\input, formulas only.")
def hidden(
    plant: Path, as_json: bool, as_latex: bool, max_seconds: float | None, max_memory: int | None
) -> None:
    """Find the modes that no input reaches or no output shows, and for which parameters.

    Each case with its condition, the mode, whether it decays, what the transfer functions look like
    there, and the response to initial conditions in which the mode still shows.
    """
    session = Session("hidden", plant, as_json, max_seconds, max_memory)
    width, unicode, colour = page_width(), speaks_unicode(), wants_colour()

    def work(channel: Channel) -> int:
        from symplant.checking.numerical_process import NumericalProcess

        with NumericalProcess() as numerics:  # first of all: its libraries load slowly
            from symplant.face.zeros_work import hidden_and_check, hidden_plan
            from symplant.reading.plant_file import read_plant_file
            from symplant.writing.notation import Notation

            model = read_plant_file(plant)
            notation = Notation(model)
            channel.plan(hidden_plan(model))
            keeper = Keeper(channel, notation, as_json, width, unicode)
            found = hidden_and_check(model, numerics, channel.stage, keeper.found)
        if as_json:
            from symplant.writing.hidden_answer import hidden_answer

            channel.out(dump(hidden_answer(found.modes, model, found.checks, notation.latex)))
        elif as_latex:
            from symplant.writing.hidden_fragment import hidden_fragment

            return give_fragment(channel, hidden_fragment(found.modes, model), found.derived)
        else:
            from symplant.writing.hidden_page import hidden_page

            page = hidden_page(found.modes, model, found.checks, width, unicode)
            channel.out(page.coloured() if colour else page.plain())
        return 0 if found.passed else 1

    sys.exit(session.run(work))
