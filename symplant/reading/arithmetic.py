"""Arithmetic text to expression trees: the strict reader of plant files and claims.

Precedence is Python's in value: `-x**2` is `-(x**2)`, `2**-1` is a half, `**` groups from the right.  The
reader is our own because letters may be called `lambda` or `in`, because every fault is to be found
at once with its column, and because nothing that a user wrote may ever be evaluated as a program.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable
from functools import lru_cache

from symplant.algebra.expression import Node
from symplant.errors import Fault, InputError
from symplant.reading.letters import name_faults
from symplant.reading.precedence import MAX_NESTING, Parser
from symplant.reading.tokens import normal_form, tokenize

__all__ = ["MAX_LENGTH", "MAX_NESTING", "read_arithmetic"]

#: Longest text of one entry, in characters.
MAX_LENGTH = 20_000
_MAX_FAULTS = 50


def read_arithmetic(text: str, names: Collection[str]) -> Node:
    """The tree of one entry in Python arithmetic.

    `names` are the declared letters; functions are those of `symplant.algebra.expression.FUNCTIONS`,
    the one constant is pi, a decimal is the exact rational that it spells.  Exponents are numbers,
    whole or half of a whole number, at most 60 either way.  Every part of the tree carries its column;
    sums and products start where their first part does, quotients and powers point at their sign.

    Raises InputError with all faults found, each at "column N", counted from 1.

    >>> read_arithmetic("-k/2", ["k"]).factors[1]
    Quotient(numerator=Name(name='k', column=2), denominator=Number(value=Fraction(2, 1), column=4), column=3)
    >>> read_arithmetic("2k + ml", ["k", "m1"])
    Traceback (most recent call last):
    symplant.errors.InputError: column 2: no operator between '2' and 'k' (a product is written 2*k)
    column 6: undeclared letter 'ml' (did you mean 'm1'?)
    """
    if len(text) > MAX_LENGTH:
        reason = f"text of {len(text):,} characters"
        raise InputError([Fault(f"column {MAX_LENGTH + 1}", reason, f"at most {MAX_LENGTH:,} are read")])
    letters = _letters(frozenset(names))
    read = tokenize(text)
    faults = [*read.faults, *name_faults(read.tokens, letters)]
    if not read.tokens and not faults:
        faults.append(Fault("column 1", "nothing is written here", "write 0 for zero"))
    tree = None
    if read.whole and read.tokens:
        parser = Parser(letters)
        tree = parser.parse(read.tokens)
        faults += parser.faults
    if tree is None or faults:
        raise InputError(_in_order(faults))
    return tree


@lru_cache(maxsize=64)
def _letters(names: frozenset[str]) -> dict[str, str]:
    """Declared letters by normal form: the same for all entries of a plant."""
    return {normal_form(name): name for name in names}


def _in_order(faults: Iterable[Fault]) -> list[Fault]:
    """Faults from left to right; of a text that is no arithmetic at all, the first and their number."""
    every = sorted(dict.fromkeys(faults), key=lambda fault: int(fault.place.removeprefix("column ")))
    if len(every) <= _MAX_FAULTS:
        return every
    rest = every[_MAX_FAULTS:]
    return [*every[:_MAX_FAULTS], Fault(rest[0].place, f"{len(rest)} more faults from here on")]
