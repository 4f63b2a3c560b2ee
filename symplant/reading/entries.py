"""Texts of entries: arithmetic, or LaTeX if there is a backslash or a brace in them."""

from __future__ import annotations

import re
from collections.abc import Sequence
from contextlib import suppress
from functools import cached_property

from symplant.algebra.expression import FUNCTIONS, Node
from symplant.errors import Fault, InputError
from symplant.plant.parameter import Parameter
from symplant.reading.arithmetic import read_arithmetic
from symplant.reading.letters import CONSTANT

__all__ = ["EntryReader", "is_latex"]

# What is left of a LaTeX command when a double-quoted string has taken its first two characters
# for an escape: \beta, \frac, \tau, \rho, \nu and their like.
_EATEN_FOR_SURE = re.compile("[\b\f]")
_EATEN_PERHAPS = re.compile("\t(?=au|heta|ext|imes|an)|\r(?=ho|ight|m)|\n(?=u|eq)")


def is_latex(text: str) -> bool:
    r"""Whether an entry is LaTeX: nothing in arithmetic has a backslash or a brace.

    >>> is_latex(r"\frac{k}{m}"), is_latex("k/m")
    (True, False)
    """
    return any(mark in text for mark in "\\{}")


class EntryReader:
    """Reads entries in the letters of one plant.

    >>> EntryReader([Parameter("k")]).read("2*k").factors[1]
    Name(name='k', column=3)
    """

    def __init__(self, parameters: Sequence[Parameter]) -> None:
        self._parameters = tuple(parameters)
        # A parameter called like a function was reported; here the name keeps its usual meaning.
        self._names = frozenset(p.name for p in parameters) - {*FUNCTIONS, CONSTANT}

    @property
    def has_read_latex(self) -> bool:
        """Whether any entry was LaTeX, so that letters were told apart by their spellings."""
        return "_spellings" in self.__dict__

    @cached_property
    def _spellings(self) -> dict[str, str]:
        """Names by spelling; what does not spell a letter, or not one alone, is reported elsewhere."""
        from symplant.reading.latex import canonical_spelling, default_spelling

        names: dict[str, str] = {}
        for parameter in self._parameters:
            with suppress(InputError):
                spelling = canonical_spelling(parameter.latex or default_spelling(parameter.name))
                names.setdefault(spelling, parameter.name)
        return names

    def read(self, text: str) -> Node:
        """The tree of one entry; raises InputError with places "column N"."""
        if eaten := _EATEN_FOR_SURE.search(text):
            raise InputError([_eaten(eaten)])
        try:
            if not is_latex(text):
                return read_arithmetic(text, self._names)
            from symplant.reading.latex import read_latex

            return read_latex(text, self._spellings)
        except InputError as error:
            raise _with_eaten(error, text) from None

    def read_matrix(self, text: str) -> list[list[Node]]:
        """The trees of a matrix that is one LaTeX text; raises InputError with places "column N"."""
        if eaten := _EATEN_FOR_SURE.search(text):
            raise InputError([_eaten(eaten)])
        from symplant.reading.latex import read_latex_matrix

        try:
            return read_latex_matrix(text, self._spellings)
        except InputError as error:
            raise _with_eaten(error, text) from None


def _eaten(match: re.Match[str]) -> Fault:
    reason = "a backslash in double quotes was taken for an escape"
    return Fault(f"column {match.start() + 1}", reason, "write LaTeX in single quotes: '...'")


def _with_eaten(error: InputError, text: str) -> InputError:
    eaten = _EATEN_PERHAPS.search(text)
    return error if eaten is None else InputError([_eaten(eaten), *error.faults])
