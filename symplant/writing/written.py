"""Trees written as text piece by piece, each piece with its width; the notations build on this."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Sequence
from enum import IntEnum
from typing import NamedTuple

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum

__all__ = ["Level", "TreeWriter", "Written"]


_NUMBERS = ("number", "figures", "fraction")
_PLAIN = ("name", "number", "constant")


class Level(IntEnum):
    """How tightly a piece of text holds together."""

    SUM = 0
    PRODUCT = 1
    QUOTIENT = 2
    POWER = 3
    ATOM = 4


class Written(NamedTuple):
    """The text of a tree, its width, and what its neighbours must know of it.

    A minus sign in front is not part of `text`: `negative` says that there is one.  `kind` tells the
    neighbours in a product what stands there: "number", "figures" (a number in groups of digits),
    "fraction" (of numbers), "constant", "name",
    "word" (an upright name of several letters), "bare" (a function whose argument has no brackets),
    "function" (one whose argument has), "call" (a bracket that could be taken for an argument) or
    "value".  `closed` is the text and width to use where a bare function cannot stand.  `factors` are
    those of a product, in the order of the text; `terms` those of a sum; `inside` is what brackets
    enclose; `node` is the tree, without its sign.
    """

    text: str
    width: float
    level: Level
    node: Node
    negative: bool = False
    kind: str = "value"
    closed: tuple[str, float] | None = None
    factors: tuple[Written, ...] = ()
    inside: Written | None = None
    terms: tuple[Written, ...] = ()


class TreeWriter(ABC):
    """Writes trees in one notation.  Widths are in the unit in which lines of it are measured."""

    #: Signs between terms and in front of a term, with their widths.
    plus: tuple[str, float]
    minus: tuple[str, float]
    sign: tuple[str, float]
    #: What stands between the last factor of one line and the first of the next.
    times: tuple[str, float]
    #: The space beside a bracket that is broken into lines.
    loose: tuple[str, float]
    #: The division sign between two brackets that are broken into lines.
    over: tuple[str, float]
    #: Width of a pair of brackets, and of what stands between two factors.
    pair: float
    gap: float
    #: What stands between two names whichever they are; None if that depends.
    between_names: tuple[str, float] | None = None

    def __init__(self) -> None:
        # Powers and functions of a long formula are the same objects in many of its terms.
        self._known: dict[int, tuple[Node, Written]] = {}

    def write(self, node: Node) -> Written:
        """The text of a tree."""
        known = self._known.get(id(node))
        if known is not None:
            return known[1]
        match node:
            case Product():
                return self._product(node)
            case Sum():
                return self._sum(node)
            case Number():
                return self._number(node)
            case Name():
                written = self._name(node)
            case Power():
                written = self._power(node)
            case Call():
                written = self._call(node, self.write(node.argument))
            case Quotient():
                written = self._quotient(node, self.write(node.numerator), self.write(node.denominator))
        self._known[id(node)] = (node, written)
        return written

    def text(self, node: Node) -> str:
        """The text of a tree, with its sign."""
        return self.signed(self.write(node))[0]

    def signed(self, written: Written) -> tuple[str, float]:
        """Text and width with the minus sign, if there is one."""
        if not written.negative:
            return written.text, written.width
        return self.sign[0] + written.text, self.sign[1] + written.width

    def _sum(self, node: Sum) -> Written:
        terms = [self.write(term) for term in _flat(node)]
        text, width = self.signed(terms[0])
        parts = [text]
        for term in terms[1:]:
            sign, space = self.minus if term.negative else self.plus
            parts.append(sign + term.text)
            width += space + term.width
        return Written("".join(parts), width, Level.SUM, node, terms=tuple(terms))

    def _product(self, node: Product) -> Written:
        numbers: list[Written] = []
        constants: list[Written] = []
        others: list[Written] = []
        negative = False
        for part in node.factors:
            written = self.write(part)
            negative ^= written.negative
            for factor in written.factors or (written,):
                if factor.negative or factor.level is Level.SUM or factor.level is Level.QUOTIENT:
                    factor = self.in_product(factor)
                if factor.kind == "name":
                    others.append(factor)
                elif factor.kind in _NUMBERS:
                    numbers.append(factor)
                else:
                    (constants if factor.kind == "constant" else others).append(factor)
        shown = [f for f in numbers if not (isinstance(f.node, Number) and abs(f.node.value) == 1)]
        factors = [*shown, *constants, *others]
        if not factors:
            return numbers[0]._replace(negative=negative)
        if len(factors) == 1:
            return factors[0]._replace(negative=negative)
        return self.joined(factors, node, negative)

    def joined(self, factors: Sequence[Written], node: Node, negative: bool) -> Written:
        """A product of factors that stand in their order and have their brackets."""
        if self.between_names and all(f.kind == "name" for f in factors[1:]) and factors[0].kind in _PLAIN:
            glue, space = self.between_names
            total = sum([f.width for f in factors]) + space * (len(factors) - 1)
            return Written(
                glue.join([f.text for f in factors]),
                total,
                Level.PRODUCT,
                node,
                negative,
                factors=tuple(factors),
            )
        chosen: list[Written] = []
        for factor, after in zip(factors, (*factors[1:], None), strict=True):
            if factor.closed and after is not None and not self.may_follow_bare(after):
                text, width = factor.closed
                factor = factor._replace(text=text, width=width, closed=None, kind="function")
            chosen.append(factor)
        parts, total = [chosen[0].text], chosen[0].width
        before = chosen[0]
        for factor in chosen[1:]:
            glue, space = self.glue(before, factor)
            parts.append(glue + factor.text)
            total += space + factor.width
            before = factor
        return Written("".join(parts), total, Level.PRODUCT, node, negative, factors=tuple(chosen))

    def may_follow_bare(self, written: Written) -> bool:
        """Whether a factor may stand behind a function without brackets: only another function may."""
        return written.kind in ("bare", "function")

    @abstractmethod
    def in_product(self, written: Written) -> Written:
        """A piece as a factor: in brackets where it needs them, its sign taken off."""

    @abstractmethod
    def bracket(self, written: Written) -> Written:
        """A piece, with its sign, in brackets."""

    @abstractmethod
    def glue(self, before: Written, after: Written) -> tuple[str, float]:
        """What stands between two factors."""

    @abstractmethod
    def exponent(self, exponent: int) -> float:
        """The width that an exponent adds to a bracket."""

    @abstractmethod
    def opening(self, function: str, tall: bool) -> tuple[str, float]:
        """The opening bracket, after the function's name if there is one, that may close on a later line."""

    @abstractmethod
    def closing(self, function: str, exponent: int, tall: bool) -> tuple[str, float]:
        """The bracket that closes on a later line, with its exponent."""

    @abstractmethod
    def tall(self, written: Written) -> bool:
        """Whether brackets round this piece must be larger than usual."""

    @abstractmethod
    def pieces(self, written: Written) -> list[tuple[str, float]]:
        """The parts into which a long number may be cut at the end of a line; else the whole."""

    @abstractmethod
    def _name(self, node: Name) -> Written: ...

    @abstractmethod
    def _number(self, node: Number) -> Written: ...

    @abstractmethod
    def _power(self, node: Power) -> Written: ...

    @abstractmethod
    def _quotient(self, node: Quotient, top: Written, bottom: Written) -> Written: ...

    @abstractmethod
    def _call(self, node: Call, argument: Written) -> Written: ...


def _flat(node: Sum) -> list[Node]:
    """The terms of a sum, those of sums within it included."""
    terms: list[Node] = []
    stack: list[Node] = [*reversed(node.terms)]
    while stack:
        term = stack.pop()
        if isinstance(term, Sum):
            stack.extend(reversed(term.terms))
        else:
            terms.append(term)
    return terms
