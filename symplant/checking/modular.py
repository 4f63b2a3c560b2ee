r"""A second reader of printed formulas: values modulo a prime, straight from the text.

It knows the LaTeX that our own writer prints and nothing more: sums, products side by side or with
\cdot, \frac, \sqrt, integer powers, brackets of every size, functions, e to a power.  It shares no
code with the reader of LaTeX in `reading`, makes no tree, and is linear in the length of the text.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from fractions import Fraction
from typing import Any

from flint import nmod

from symplant.checking.residue_point import ResiduePoint
from symplant.checking.residues import PRIME
from symplant.reading.latex import canonical_spelling

__all__ = ["MisprintError", "read_modulo"]

_COMMANDS = {r"\ln": "log", r"\log": "log", r"\arctan": "atan", r"\exp": "exp"}
_COMMANDS |= {rf"\{name}": name for name in ("sin", "cos", "tan", "sinh", "cosh", "tanh", "atan")}
_SIZES = re.compile(r"\\(?:left|right|[bB]igg?[lrm]?)(?![A-Za-z])\s*")
_GROUPED = re.compile(r"(?<=[0-9])\\,(?=[0-9]{3}(?![0-9]))")
_SPACING = re.compile(r"\\[,;:! ]|~")
_CLOSERS = {"(": ")", "[": "]", "{": "}"}
_OWN = r"\\[A-Za-z]+|[0-9]+(?:\.[0-9]+)?|\S"


class MisprintError(ValueError):
    """A text is no formula as our own writer prints them."""


def read_modulo(latex: str, spellings: Mapping[str, str], point: ResiduePoint) -> Any:
    r"""The residue of a printed formula at a point; `spellings` maps LaTeX spellings to names.

    Errors: MisprintError for a text that cannot be read, UndefinedValueError for one that divides by
    zero there or uses a function that the ring does not have.

    >>> from symplant.algebra.ring import Ring
    >>> from symplant.checking.residue_point import residue_points
    >>> ring = Ring("s", ("k", "m"))
    >>> (point,) = residue_points(ring, 1)
    >>> value = read_modulo(r"\frac{k}{m} + 2 s^{2}", {"k": "k", "m": "m", "s": "s"}, point)
    >>> k, m, s = (ring.gen(x) for x in "kms")
    >>> value * point.element(m) == point.element(k + 2 * m * s**2)
    True
    """
    return _Reading(latex, spellings, point).whole()


class _Reading:
    """One pass over one text."""

    def __init__(self, latex: str, spellings: Mapping[str, str], point: ResiduePoint) -> None:
        self.arithmetic = point.arithmetic
        self.values = {
            form: point.names[name]
            for spelling, name in spellings.items()
            if name in point.names
            for form in _forms(spelling)
        }
        self.tokens = [*_tokens(latex, tuple(self.values)), ""]
        self.at = 0

    def whole(self) -> Any:
        return self._sum("")

    def _take(self) -> str:
        token = self.tokens[self.at]
        self.at += 1
        return token

    def _fault(self) -> MisprintError:
        before = " ".join(self.tokens[max(0, self.at - 4) : self.at])
        here = self.tokens[min(self.at, len(self.tokens) - 1)] or "the end"
        return MisprintError(f"unexpected {here} after {before!r}")

    def _sum(self, end: str) -> Any:
        total = nmod(0, PRIME)
        sign = self._sign()
        while True:
            term = self._product()
            total = total - term if sign == "-" else total + term
            if self.tokens[self.at] == end:
                self.at += 1
                return total
            if self.tokens[self.at] not in ("+", "-"):
                raise self._fault()
            sign = self._take()

    def _sign(self) -> str:
        return self._take() if self.tokens[self.at] in ("+", "-") else "+"

    def _product(self) -> Any:
        value = self._factor()
        while (token := self.tokens[self.at]) not in ("+", "-", ")", "]", "}", ""):
            if token == "/":
                self.at += 1
                value = value * self.arithmetic.inverse(self._factor())
                if self.tokens[self.at] not in ("+", "-", ")", "]", "}", ""):
                    raise self._fault()  # what follows a division reads two ways
                return value
            if token == r"\cdot":
                self.at += 1
            elif token[0].isdigit():
                raise self._fault()
            value = value * self._factor()
        return value

    def _factor(self) -> Any:
        token = self._take()
        if token in self.values:
            value = self.values[token]
        elif token[:1].isdigit():
            value = self.arithmetic.number(Fraction(token))
        elif token in _CLOSERS:
            value = self._sum(_CLOSERS[token])
        elif token == r"\frac":
            top = self._group()
            value = top * self.arithmetic.inverse(self._group())
        elif token == r"\sqrt":
            value = self.arithmetic.function("sqrt", self._group())
        elif token in _COMMANDS:
            return self._function(_COMMANDS[token])
        elif token in ("e", "\\mathrm{e}") and self.tokens[self.at] == "^":
            self.at += 1
            value = self.arithmetic.function("exp", self._group())
        else:
            self.at -= 1
            raise self._fault()
        return self._raised(value)

    def _function(self, name: str) -> Any:
        exponent = self._exponent() if self.tokens[self.at] == "^" else Fraction(1)
        if exponent.denominator != 1 or exponent < 1:  # an exponent -1 would read as the inverse function
            raise self._fault()
        token = self._take()
        if token == "(":
            argument = self._sum(")")
        elif token in self.values:
            argument = self.values[token]
        else:
            raise self._fault()
        return self.arithmetic.function(name, argument) ** int(exponent)

    def _raised(self, value: Any) -> Any:
        if self.tokens[self.at] != "^":
            return value
        exponent = self._exponent()
        if self.tokens[self.at] == "^":
            raise self._fault()
        if exponent.denominator == 2:
            value = self.arithmetic.function("sqrt", value)
        whole = int(exponent * exponent.denominator)
        return value**whole if whole >= 0 else self.arithmetic.inverse(value) ** -whole

    def _exponent(self) -> Fraction:
        """The number in braces behind a hat: whole, or a fraction over 2."""
        self.at += 1
        self._expect("{")
        if self.tokens[self.at] == r"\frac":
            self.at += 1
            top, bottom = self._integer_group(), self._integer_group()
            if bottom != 2:
                raise self._fault()
            exponent = Fraction(top, bottom)
        else:
            exponent = Fraction(self._integer())
        self._expect("}")
        return exponent

    def _integer_group(self) -> int:
        self._expect("{")
        value = self._integer()
        self._expect("}")
        return value

    def _integer(self) -> int:
        sign = -1 if self.tokens[self.at] == "-" else 1
        self.at += sign < 0
        if not self.tokens[self.at].isdigit():
            raise self._fault()
        return sign * int(self._take())

    def _expect(self, token: str) -> None:
        if self.tokens[self.at] != token:
            raise self._fault()
        self.at += 1

    def _group(self) -> Any:
        self._expect("{")
        return self._sum("}")


def _forms(spelling: str) -> tuple[str, ...]:
    """A spelling as declared, and in the normal form that is printed where an exponent follows a prime."""
    return (spelling, canonical_spelling(spelling)) if "'" in spelling else (spelling,)


def _tokens(latex: str, names: tuple[str, ...]) -> list[str]:
    """Names as spelled (longest first), commands, numbers and single signs; spacing and sizes left out."""
    text = _SPACING.sub(" ", _GROUPED.sub("", _SIZES.sub("", latex)))
    parts = []
    for name in sorted(names, key=len, reverse=True):
        after = r"(?![A-Za-z])" if re.search(r"\\[A-Za-z]+$", name) else ""
        parts.append(re.escape(name) + after)
    pattern = "|".join([*parts, r"\\mathrm\{e\}", _OWN])
    return re.findall(pattern, text)
