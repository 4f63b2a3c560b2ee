"""`symplant zeros`: closed forms, minimum phase, what moves the zeros, and their way along a parameter."""

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
    from symplant.derivation.zeros.study import ZerosStudy

__all__ = ["zeros"]


@click.command(short_help="Zeros, minimum phase, and what moves the zeros.")
@plant_command
@click.option("--latex", "as_latex", is_flag=True, help="Give LaTeX to paste or \\input, formulas only.")
@click.option("--along", metavar="NAME", help="What happens to the zeros as this parameter changes.")
@click.option("--output", metavar="NAME", help="The zeros seen from this output alone.")
@click.option("--input", "input_", metavar="NAME", help="The zeros seen by this input alone.")
def zeros(
    plant: Path,
    as_json: bool,
    as_latex: bool,
    along: str | None,
    output: str | None,
    input_: str | None,
    max_seconds: float | None,
    max_memory: int | None,
) -> None:
    """Find the zeros of a plant or of one channel, and what moves them.

    Closed forms, the conditions for minimum phase, which parameters have an influence, and the inputs
    that hold the output at zero.  --output and --input together choose a channel.
    """
    session = Session("zeros", plant, as_json, max_seconds, max_memory)
    width, unicode, colour = page_width(), speaks_unicode(), wants_colour()

    def work(channel: Channel) -> int:
        from symplant.checking.numerical_process import NumericalProcess

        with NumericalProcess() as numerics:  # first of all: its libraries load slowly
            from symplant.face.zeros_work import check_names, zeros_and_check, zeros_plan
            from symplant.reading.plant_file import read_plant_file
            from symplant.writing.notation import Notation

            model = read_plant_file(plant)
            notation = Notation(model)
            check_names(model, along, output, input_, "--")
            channel.plan(zeros_plan(model, along))
            keeper = ZerosKeeper(channel, notation, as_json, width, unicode)
            found = zeros_and_check(
                model, numerics, channel.stage, keeper.found, keeper.part, along, output, input_
            )
        if as_json:
            from symplant.writing.zeros_answer import zeros_answer

            channel.out(dump(zeros_answer(found.study, found.checks, notation.latex)))
        elif as_latex:
            from symplant.writing.zeros_fragment import zeros_fragment

            return give_fragment(channel, zeros_fragment(found.study), found.derived)
        else:
            from symplant.writing.zeros_page import zeros_page

            page = zeros_page(found.study, found.checks, width, unicode)
            channel.out(page.coloured() if colour else page.plain())
        return 0 if found.passed else 1

    sys.exit(session.run(work))


class ZerosKeeper(Keeper):
    """Keeps each part of the study as well."""

    def part(self, study: ZerosStudy, part: str) -> None:
        """Keep one part."""
        if self.as_json:
            from symplant.writing.zeros_answer import zeros_part

            self.channel.keep(dump(zeros_part(study, part, self.notation.latex)))
        else:
            from symplant.writing.zeros_page import zeros_part_page

            self.channel.keep(zeros_part_page(study, part, self.width, self.unicode).plain())
