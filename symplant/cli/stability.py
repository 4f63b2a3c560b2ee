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


@click.command()
@plant_command
@click.option("--latex", "as_latex", is_flag=True, help="Give LaTeX to paste or \\input, formulas only.")
@click.option(
    "--along", metavar="NAME", help="Exact stability intervals of this parameter, others at nominal."
)
@click.option(
    "--set", "fixed", multiple=True, metavar="NAME=VALUE", help="With --along: another value than nominal."
)
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
    fixed: tuple[str, ...],
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

    def work(channel: Channel) -> int:
        from symplant.checking.second_opinion import SecondOpinion

        with SecondOpinion() as opinion:
            opinion.start()
            from symplant.face.work import derive_plan, stability_and_check
            from symplant.reading.plant_file import read_plant_file
            from symplant.writing.notation import Notation

            model = read_plant_file(plant)
            notation = Notation(model)
            values = _values(model, along, fixed)
            channel.plan(derive_plan(model, stability=True))
            keeper = Keeper(channel, notation, as_json, width, unicode)
            found = stability_and_check(
                model, opinion, channel.stage, keeper.found, along, values, effort, channel.plan
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

    sys.exit(session.run(work))


def _values(model: Model, along: str | None, fixed: tuple[str, ...]) -> dict[str, Fraction]:
    """The values given with --set, and that --along names a parameter; all faults at once."""
    from symplant.reading.suggestions import did_you_mean

    faults: list[Fault] = []
    values: dict[str, Fraction] = {}
    if along is not None and along not in model.letters:
        faults.append(
            Fault("--along", f"no parameter is called {along!r}", did_you_mean(along, model.letters))
        )
    for text in fixed:
        name, _, value = text.partition("=")
        name = name.strip()
        if name not in model.letters:
            hint = did_you_mean(name, model.letters)
            faults.append(Fault("--set", f"no parameter is called {name!r}", hint))
            continue
        try:
            values[name] = Fraction(value.strip())
        except (ValueError, ZeroDivisionError):
            faults.append(Fault("--set", f"{value!r} is not a number", "write NAME=VALUE, for example k=1.5"))
    if fixed and along is None:
        faults.append(Fault("--set", "is for --along only", "add --along NAME"))
    if faults:
        raise InputError(faults)
    return values
