"""Parameters and signals: the named quantities of a plant."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.box import Interval, Sign

__all__ = ["Parameter", "Signal"]


@dataclass(frozen=True, slots=True)
class Parameter:
    """A physical parameter: its letter and what is known of its value.

    `nominal`, `lower` and `upper` are exact and in `unit`; `latex` is the declared or the default
    spelling; `sign` is as declared (REAL when left out: then the range alone tells).

    >>> Parameter("m", lower=Fraction(80), upper=Fraction(200)).interval.sign.value
    'positive'
    """

    name: str
    latex: str = ""
    unit: str = ""
    nominal: Fraction | None = None
    lower: Fraction | None = None
    upper: Fraction | None = None
    sign: Sign = Sign.REAL
    about: str = ""

    @property
    def interval(self) -> Interval:
        """The values that the parameter may take."""
        return Interval(self.lower, self.upper, self.sign)


@dataclass(frozen=True, slots=True)
class Signal:
    """A state, an input or an output."""

    name: str
    latex: str = ""
    unit: str = ""
    about: str = ""
