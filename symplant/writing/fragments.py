r"""LaTeX to paste or \input: the formulas of an answer as displays with stable labels, nothing else."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.writing.printing import Printer
from symplant.writing.report_results import channel_sections, characteristic, zero_section
from symplant.writing.report_stability import stability_section

if TYPE_CHECKING:
    from symplant.derivation.derive import Derivation
    from symplant.derivation.stability import StabilityFinding
    from symplant.plant.model import Model

__all__ = ["derive_fragment", "stability_fragment"]

HEAD = "% needs amsmath; the formulas are those of symplant"


def derive_fragment(derivation: Derivation) -> str:
    """Characteristic polynomial, channels and zero polynomial."""
    printer = Printer(derivation.model, derivation.ring)
    display, note = characteristic(derivation, printer)
    parts = [HEAD, display, note]
    for section in channel_sections(derivation, printer):
        parts += [rf"\paragraph{{{section['heading']}}}", section["body"]]
    parts += [r"\paragraph{Zero polynomial}", zero_section(derivation, printer)]
    return "\n\n".join(parts) + "\n"


def stability_fragment(finding: StabilityFinding, model: Model) -> str:
    """Verdict, conditions and crossings."""
    printer = Printer(model, finding.polynomial.ring)
    return f"{HEAD}\n\n{stability_section(finding, printer)}\n"
