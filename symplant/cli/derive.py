"""`symplant derive`: characteristic polynomial, channels, zero polynomial, with every check made."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

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
    from symplant.derivation.derive import Channel as Finding
    from symplant.derivation.derive import Scaled
    from symplant.derivation.stability import SettledCondition
    from symplant.face.work import Derived
    from symplant.writing.fragments import Fragment
    from symplant.writing.notation import Notation

__all__ = ["derive"]


@click.command(short_help="Closed forms: characteristic polynomial, channels, zeros.")
@plant_command
@click.option("--latex", "as_latex", is_flag=True, help="Give LaTeX to paste or \\input, formulas only.")
def derive(
    plant: Path, as_json: bool, as_latex: bool, max_seconds: float | None, max_memory: int | None
) -> None:
    """Derive the closed forms of a plant and check them.

    The characteristic polynomial, every channel's numerator and denominator (nothing cancelled, common
    factors beside them), the zero polynomial, what had to be assumed nonzero, and the checks.
    """
    session = Session("derive", plant, as_json, max_seconds, max_memory)
    width, unicode, colour = page_width(), speaks_unicode(), wants_colour()

    def work(channel: Channel) -> int:
        from symplant.checking.numerical_process import NumericalProcess

        with NumericalProcess() as numerics:  # first of all: its libraries load slowly
            from symplant.face.work import derive_and_check, derive_plan
            from symplant.reading.plant_file import read_plant_file
            from symplant.writing.notation import Notation

            model = read_plant_file(plant)
            notation = Notation(model)
            channel.plan(derive_plan(model))
            keeper = Keeper(channel, notation, as_json, width, unicode)
            derived = derive_and_check(model, numerics, channel.stage, keeper.found)
        if as_json:
            from symplant.writing.answer import derive_answer

            channel.out(dump(derive_answer(derived.derivation, derived.checks, notation.latex)))
        elif as_latex:
            from symplant.writing.fragments import derive_fragment

            fragment = derive_fragment(derived.derivation)
            return give_fragment(channel, fragment, derived)
        else:
            from symplant.writing.derive_page import derive_page

            page = derive_page(derived.derivation, derived.checks, width, unicode)
            channel.out(page.coloured() if colour else page.plain())
        return 0 if derived.passed else 1

    sys.exit(session.run(work))


def give_fragment(channel: Channel, fragment: Fragment, derived: Derived) -> int:
    """Give LaTeX that has been read back; the exit status.  Failed checks are said on standard error."""
    failed = [c for c in derived.checks if not c.passed]
    failed += [c for c in fragment.read_back(derived.substitution.points) if not c.passed]
    for check in failed:
        channel.err(f"CHECK FAILED, do not use this: {check.what}: {check.method}: {check.detail}\n")
    channel.out(fragment.text)
    return 1 if failed else 0


class Keeper:
    """Keeps each finding as text in case the work is stopped before the answer is whole."""

    def __init__(
        self, channel: Channel, notation: Notation, as_json: bool, width: int, unicode: bool
    ) -> None:
        self.channel, self.notation = channel, notation
        self.as_json, self.width, self.unicode = as_json, width, unicode

    def found(self, finding: Scaled | Finding | SettledCondition) -> None:
        """Keep one finding."""
        from symplant.derivation.stability import SettledCondition

        if self.as_json:
            from symplant.writing.answer import finding_answer

            self.channel.keep(dump(finding_answer(finding, self.notation.latex)))
        elif isinstance(finding, SettledCondition):
            from symplant.writing.stability_page import settled_page

            self.channel.keep(settled_page(finding, self.width, self.unicode).plain())
        else:
            from symplant.writing.derive_page import finding_page

            self.channel.keep(finding_page(finding, self.width, self.unicode).plain())
