"""`symplant stability`: the conditions that bind, the verdict, and where stability is lost."""

from __future__ import annotations

import sys
from fractions import Fraction
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
from symplant.errors import Fault, InputError

if TYPE_CHECKING:
    from symplant.cli.budget import Channel
    from symplant.plant.model import Model

__all__ = ["stability"]


@click.command(short_help="Conditions for stability, and where it is lost.")
@plant_command
@click.option("--latex", "as_latex", is_flag=True, help="Give LaTeX to paste or \\input, formulas only.")
@click.option(
    "--along", metavar="NAME", help="Exact stability intervals of this parameter, others at nominal."
)
@click.option(
    "--plane", nargs=2, metavar="X Y", help="The stable region over two parameters, others at nominal."
)
@click.option(
    "--picture",
    type=click.Path(path_type=Path),
    metavar="FILE",
    help="With --plane: draw it (.svg, .pdf or .png).",
)
@click.option(
    "--set",
    "fixed",
    multiple=True,
    metavar="NAME=VALUE",
    help="With --along or --plane: another value than nominal.",
)
@click.option(
    "--decay",
    metavar="SIGMA",
    help="Ask for every pole left of -SIGMA; in discrete time within the radius SIGMA.",
)
@click.option("--damping", metavar="ZETA", help="Ask for a damping ratio above ZETA of every pole.")
@click.option(
    "--effort",
    type=click.Choice(["low", "normal", "high"]),
    default="normal",
    show_default=True,
    help="How much work each condition may take before it is left undecided.",
)
@click.option("--routh", is_flag=True, help="Show the Routh array.")
def stability(
    plant: Path,
    as_json: bool,
    as_latex: bool,
    along: str | None,
    plane: tuple[str, str] | None,
    picture: Path | None,
    fixed: tuple[str, ...],
    decay: str | None,
    damping: str | None,
    effort: str,
    routh: bool,
    max_seconds: float | None,
    max_memory: int | None,
) -> None:
    """Find the conditions under which a plant is asymptotically stable.

    Conditions that always hold, or follow from others, are set aside with the reason; what remains is
    exact for the signs and ranges declared.
    """
    session = Session("stability", plant, as_json, max_seconds, max_memory)
    width, unicode, colour = page_width(), speaks_unicode(), wants_colour()

    def region(channel: Channel) -> int:
        from symplant.cli.plane import show_plane
        from symplant.reading.plant_file import read_plant_file

        model = read_plant_file(plant)
        return show_plane(channel, model, plane, picture, fixed, as_json, width, unicode, colour)

    def work(channel: Channel) -> int:
        from symplant.checking.numerical_process import NumericalProcess

        with NumericalProcess() as numerics:  # first of all: its libraries load slowly
            from symplant.face.work import derive_plan, stability_and_check
            from symplant.reading.plant_file import read_plant_file
            from symplant.writing.notation import Notation

            model = read_plant_file(plant)
            notation = Notation(model)
            values, asked = _values(model, along, fixed, decay, damping)
            channel.plan(derive_plan(model, stability=True))
            keeper = Keeper(channel, notation, as_json, width, unicode)
            found = stability_and_check(
                model, numerics, channel.stage, keeper.found, along, values, effort, channel.plan, *asked
            )
        if as_json:
            from symplant.writing.answer import stability_answer

            channel.out(dump(stability_answer(found.finding, model, found.checks, notation.latex)))
        elif as_latex:
            from symplant.writing.fragments import stability_fragment

            return give_fragment(channel, stability_fragment(found.finding, model), found.derived)
        else:
            from symplant.writing.stability_page import stability_page

            page = stability_page(found.finding, model, found.checks, width, unicode, routh)
            channel.out(page.coloured() if colour else page.plain())
        return 0 if found.passed else 1

    sys.exit(session.run(region if plane or picture else work))


def _values(
    model: Model, along: str | None, fixed: tuple[str, ...], decay: str | None, damping: str | None
) -> tuple[dict[str, Fraction], tuple[Fraction | None, Fraction | None]]:
    """The values given with --set, and the margins asked for; all faults at once."""
    from symplant.cli.fixed_values import fixed_values, margin_value, unknown_parameter

    faults: list[Fault] = []
    if along is not None and along not in model.letters:
        faults.append(unknown_parameter(model, "--along", along))
    values = fixed_values(model, fixed, faults)
    if fixed and along is None:
        faults.append(Fault("--set", "is for --along and --plane only", "add --along NAME or --plane X Y"))
    asked = margin_value("--decay", decay, faults), margin_value("--damping", damping, faults)
    if faults:
        raise InputError(faults)
    return values, asked
