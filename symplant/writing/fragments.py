r"""LaTeX to paste or \input: the formulas of an answer as displays with stable labels, nothing else."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from symplant.algebra.verdict import Check, Verdict
from symplant.checking.readback import read_back
from symplant.writing.printing import Printer
from symplant.writing.report_results import channel_sections, characteristic, zero_section
from symplant.writing.report_stability import stability_section

if TYPE_CHECKING:
    from symplant.checking.point import Point
    from symplant.derivation.derive import Derivation
    from symplant.derivation.stability import StabilityFinding
    from symplant.plant.model import Model

__all__ = ["Fragment", "derive_fragment", "head", "stability_fragment"]

HEAD = "% needs amsmath; every formula was read back from this text and compared with what was derived"


@dataclass(frozen=True)
class Fragment:
    """A piece of LaTeX and the printer that wrote its formulas."""

    text: str
    printer: Printer

    def read_back(self, points: Sequence[Point]) -> list[Check]:
        """Checks of all its formulas at the points of the exact substitution.

        Formulas with roots that the plant's ring has not may have no real value there: the second
        reader alone takes them.
        """
        ring, inverse = self.printer.ring, self.printer.spelling.inverse
        plain = [p for p in self.printer.printed if p.ring is ring]
        rooted = [p for p in self.printer.printed if p.ring is not ring]
        checks = [*read_back(plain, inverse, points), *(read_back(rooted, inverse, ()) if rooted else [])]
        method = "printed LaTeX read back"
        return checks + [Check(what, method, Verdict.UNDECIDED, why) for what, why in self.printer.unread]


def head(printer: Printer) -> str:
    """The first lines of a fragment: what it needs, and what could not be read back."""
    rest = [f"% not read back: {what}: {why}" for what, why in dict.fromkeys(printer.unread)]
    return "\n".join([HEAD.replace("every formula", "every formula not named here") if rest else HEAD, *rest])


def derive_fragment(derivation: Derivation) -> Fragment:
    """Characteristic polynomial, channels and zero polynomial."""
    printer = Printer(derivation.model, derivation.ring)
    display, note = characteristic(derivation, printer)
    parts = [HEAD, display, note]
    for section in channel_sections(derivation, printer):
        parts += [rf"\paragraph{{{section['heading']}}}", section["body"]]
    parts += [r"\paragraph{Zero polynomial}", zero_section(derivation, printer)]
    return Fragment("\n\n".join(parts) + "\n", printer)


def stability_fragment(finding: StabilityFinding, model: Model) -> Fragment:
    """Verdict, conditions and crossings."""
    printer = Printer(model, finding.polynomial.ring)
    return Fragment(f"{HEAD}\n\n{stability_section(finding, printer)}\n", printer)
