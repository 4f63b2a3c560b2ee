"""Expression trees: what a piece of text says, before any algebra is done to it.

A tree is all that the readers (arithmetic text, LaTeX, SymPy) hand on.  It keeps what was
written, division by division, so that nothing can cancel unseen; the ring makes numbers of it.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from fractions import Fraction
from typing import TypeAlias

__all__ = [
    "FUNCTIONS",
    "Call",
    "Name",
    "Node",
    "Number",
    "Power",
    "Product",
    "Quotient",
    "Sum",
    "children",
    "integer",
    "names_in",
    "negated",
    "walk",
]

#: Functions of parameters that an expression may use, and their number of arguments (always one).
FUNCTIONS = ("sin", "cos", "tan", "exp", "log", "sqrt", "sinh", "cosh", "tanh", "atan")


@dataclass(frozen=True, slots=True)
class Number:
    """An exact rational number.  `column` (from 1, 0 if unknown) is its place in the text."""

    value: Fraction
    column: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Name:
    """A declared letter, the polynomial variable, or the constant `pi`."""

    name: str
    column: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Sum:
    """Sum of two or more terms; a difference holds a term `Product((Number(-1), x))`."""

    terms: tuple[Node, ...]
    column: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Product:
    """Product of two or more factors."""

    factors: tuple[Node, ...]
    column: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Quotient:
    """Numerator over denominator, as written; `column` points at the division sign."""

    numerator: Node
    denominator: Node
    column: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Power:
    """A base to an integer exponent, which may be negative; a square root is `Call("sqrt", x)`."""

    base: Node
    exponent: int
    column: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Call:
    """A function of `FUNCTIONS` applied to one argument."""

    function: str
    argument: Node
    column: int = field(default=0, compare=False)


Node: TypeAlias = Number | Name | Sum | Product | Quotient | Power | Call


def integer(value: int) -> Number:
    """The tree of an integer.

    >>> integer(3)
    Number(value=Fraction(3, 1), column=0)
    """
    return Number(Fraction(value))


def negated(node: Node) -> Node:
    """The tree of minus `node`; numbers change their sign, everything else gets a factor -1.

    >>> negated(integer(3)).value
    Fraction(-3, 1)
    """
    if isinstance(node, Number):
        return Number(-node.value, node.column)
    return Product((integer(-1), node), node.column)


def children(node: Node) -> tuple[Node, ...]:
    """The direct parts of a tree, in the order written."""
    match node:
        case Sum(terms=parts) | Product(factors=parts):
            return parts
        case Quotient(numerator=top, denominator=bottom):
            return (top, bottom)
        case Power(base=part) | Call(argument=part):
            return (part,)
        case _:
            return ()


def walk(node: Node) -> Iterator[Node]:
    """Every part of the tree, parts before the whole, without recursion (texts may be deep).

    >>> [type(part).__name__ for part in walk(Power(Name("k"), 2))]
    ['Name', 'Power']
    """
    stack: list[tuple[Node, bool]] = [(node, False)]
    while stack:
        current, opened = stack.pop()
        if opened:
            yield current
            continue
        stack.append((current, True))
        stack.extend((part, False) for part in reversed(children(current)))


def names_in(node: Node) -> set[str]:
    """The names that occur in a tree.

    >>> sorted(names_in(Quotient(Name("k"), Name("m"))))
    ['k', 'm']
    """
    return {part.name for part in walk(node) if isinstance(part, Name)}
