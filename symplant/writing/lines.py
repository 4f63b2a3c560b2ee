"""Breaking a formula into lines that are never wider than the page.

Breaks come, in this order, before a plus or minus between terms; within a bracket that is itself
wider than a line; between the factors of a product; between the digit groups of a number.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum
from symplant.writing.written import Level, TreeWriter, Written

__all__ = ["Line", "broken"]

#: Deepest indentation of a continuation line, in steps.
DEEPEST = 4


class Line(NamedTuple):
    """One line: its text, its width without the indentation, and its indentation in steps."""

    text: str
    width: float
    indent: int = 0


def broken(
    writer: TreeWriter, tree: Node | Written, room: float, first: float | None = None, step: float = 1.0
) -> tuple[Line, ...]:
    r"""The lines of a tree, which may be written already.

    `room` is the width of a line in the writer's unit, of which a continuation line loses `step` for
    each step of indentation; `first` is what the first line has (default: all of it).

    >>> from symplant.algebra.expression import Name
    >>> from symplant.writing.latex_tree import LatexWriter
    >>> from symplant.writing.spelling import Spelling
    >>> writer = LatexWriter(Spelling.of("s", {name: name for name in "abc"}))
    >>> tree = Sum((Name("a"), Sum((Name("b"), Name("c")))))
    >>> [line.text for line in broken(writer, tree, 3.5)]
    ['a + b', '+ c']
    """
    written = tree if isinstance(tree, Written) else writer.write(tree)
    setter = _Setter(writer, room, room if first is None else first, step)
    if writer.signed(written)[1] <= setter.room():
        setter.put(*writer.signed(written))
    else:
        setter.sum(_terms(written), 0, 0.0)
    return setter.finished()


class _Setter:
    """Sets pieces one after the other, the lines done and the line in hand."""

    def __init__(self, writer: TreeWriter, room: float, first: float, step: float) -> None:
        self.writer = writer
        self.full, self.first, self.step = room, first, step
        self.lines: list[Line] = []
        self.parts: list[str] = []
        self.used = 0.0
        self.indent = 0

    def room(self, level: int | None = None) -> float:
        """What is left of the line in hand, or what a fresh line at a level has."""
        if level is not None:
            return self.full - self.step * min(level, DEEPEST)
        if not self.lines:
            return self.first - self.used
        return self.full - self.step * self.indent - self.used

    def put(self, text: str, width: float) -> None:
        """Sets a piece on the line in hand."""
        self.parts.append(text)
        self.used += width

    def fresh(self, level: int) -> None:
        """Begins a line, unless the one in hand holds nothing and gains nothing by it."""
        if not self.parts and (self.lines or self.first >= self.room(level)):
            self.indent = min(level, DEEPEST)
            return
        self.lines.append(Line("".join(self.parts).strip(), self.used, self.indent))
        self.parts, self.used, self.indent = [], 0.0, min(level, DEEPEST)

    def finished(self) -> tuple[Line, ...]:
        """All lines."""
        if self.parts:
            self.fresh(0)
        return tuple(self.lines)

    def sum(self, terms: Sequence[Written], level: int, tail: float) -> None:
        """Sets terms; behind the last one `tail` stays free.  Continuation lines stand at level + 1."""
        split = False  # whether the term before was broken: then the next one begins a line
        for i, term in enumerate(terms):
            sign, space = self._sign(term, first=i == 0)
            need = space + term.width + (tail if i == len(terms) - 1 else 0.0)
            if split or need > self.room():
                whole = need <= self.room(level + 1)
                # A term that must be broken anyway may begin behind a bracket that was just opened.
                if split or whole or i > 0:
                    self.fresh(level + 1)
                split = not whole
            self.put(sign, space)
            if split:
                self._force(term, level + 1, tail if i == len(terms) - 1 else 0.0)
            else:
                self.put(term.text, term.width)

    def _sign(self, term: Written, first: bool) -> tuple[str, float]:
        if first:
            return self.writer.sign if term.negative else ("", 0.0)
        return self.writer.minus if term.negative else self.writer.plus

    def _force(self, term: Written, level: int, tail: float) -> None:
        """Sets a term that fits on no line, breaking it within."""
        factors = term.factors or (term,)
        loose = False  # whether a broken bracket stands before
        for i, factor in enumerate(factors):
            last = i == len(factors) - 1
            glue = (
                self.writer.loose if loose else self.writer.glue(factors[i - 1], factor) if i else ("", 0.0)
            )
            if glue[1] + factor.width <= self.room() - (tail if last else 0.0):
                self.put(glue[0] + factor.text, glue[1] + factor.width)
                loose = False
                continue
            sign = self.writer.times if i else ("", 0.0)
            # Behind letters alone a bracket is opened; behind another bracket it moves to the next line.
            opens = _bracket_in(factor) and not any(map(_bracket_in, factors[:i]))
            if not opens and sign[1] + factor.width <= self.room(level):
                self.fresh(level)
                self.put(sign[0] + factor.text, sign[1] + factor.width)
                loose = False
                continue
            if loose or isinstance(_base(factor), Name | Number):
                self.fresh(level)
                self.put(*sign)
            elif i:
                self.put(*(self.writer.times if _holds_no_sum(factor) else self.writer.loose))
            behind = sum(f.width + self.writer.loose[1] for f in factors[i + 1 :]) + tail
            behind = behind if behind < self.room(level) / 3 else 0.0
            self._break(factor, level, behind, alone=len(factors) == 1)
            loose = True

    def _break(self, factor: Written, level: int, tail: float, alone: bool) -> None:
        """Sets a factor that fits on no line."""
        node: Node = factor.node
        exponent, raised = 1, False
        if isinstance(node, Power) and node.exponent > 0:
            exponent, node, raised = node.exponent, node.base, True
        if isinstance(node, Call):
            self._bracketed(node.function, self.writer.write(node.argument), exponent, level, tail)
        elif isinstance(node, Sum) or (raised and isinstance(node, Product | Quotient)):
            self._bracketed("", factor.inside or self.writer.write(node), exponent, level, tail)
        elif isinstance(node, Quotient):
            self._quotient(node, level, tail, alone)
        else:
            for text, width in self.writer.pieces(factor):
                if width > self.room():
                    self.fresh(level)
                self.put(text, width)

    def _quotient(self, node: Quotient, level: int, tail: float, alone: bool) -> None:
        """A fraction as a division with a slash; its sign stands in front already."""
        if not alone:
            self.put(*self.writer.opening("", False))
        top, bottom = (_bare(self.writer.write(part)) for part in (node.numerator, node.denominator))
        bare = (top.factors or (top,))[-1].kind == "bare"  # what follows could be taken for its argument
        if top.level > Level.SUM and top.width <= self.room() and not bare:
            self.put(top.text, top.width)
        else:
            self._bracketed("", top, 1, level, 0.0)
        if self.writer.over[1] + bottom.width > self.room():
            self.fresh(level)
        self.put(*self.writer.over)
        self._bracketed("", bottom, 1, level, tail)
        if not alone:
            self.put(*self.writer.closing("", 1, False))

    def _bracketed(self, function: str, inner: Written, exponent: int, level: int, tail: float) -> None:
        """Brackets, after a function's name if there is one, and between them what must be broken."""
        tall = self.writer.tall(inner)
        opening, closing = self.writer.opening(function, tall), self.writer.closing(function, exponent, tall)
        if opening[1] + 1.0 > self.room():
            self.fresh(level)
        self.put(*opening)
        self.sum(_terms(inner), level, closing[1] + tail)
        if closing[1] > self.room():
            self.fresh(level)
        self.put(*closing)


def _base(factor: Written) -> Node:
    """The tree of a factor, or of what it is a power of."""
    return factor.node.base if isinstance(factor.node, Power) else factor.node


def _bracket_in(factor: Written) -> bool:
    """Whether a factor is a sum in brackets, or a power of one."""
    return isinstance(_base(factor), Sum)


def _holds_no_sum(factor: Written) -> bool:
    """Whether a factor, broken, begins with a bracket that need hold no sign: it could be an argument."""
    node = _base(factor)
    if isinstance(node, Call):
        return node.function == "sqrt" and not isinstance(node.argument, Sum)
    return isinstance(factor.node, Power) and not isinstance(node, Sum)


def _bare(written: Written) -> Written:
    """A piece without its sign and without brackets round the whole."""
    return written._replace(negative=False) if written.inside is None else written.inside


def _terms(written: Written) -> list[Written]:
    return list(written.terms) or [written]
