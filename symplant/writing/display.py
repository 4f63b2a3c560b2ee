r"""Formulas set in lines that fit the page, as LaTeX displays."""

from __future__ import annotations

from dataclasses import dataclass

from symplant.algebra.expression import Node
from symplant.algebra.ring import Element, Ring
from symplant.writing.latex_tree import LatexWriter
from symplant.writing.lines import Line, broken
from symplant.writing.width import RELATION, width

__all__ = ["LINE", "Formula", "set_formula", "two_sided"]

#: Width in em that fits the text of the standard classes at 10, 11 and 12 pt.
LINE = 32.0
#: A left side wider than this part of the line stands on a line of its own.
WIDE_LEFT = 0.4
#: Displays with more lines than these may be broken between pages.
PAGE_LINES = 12


@dataclass(frozen=True)
class Formula:
    r"""A formula set in lines: `lhs` = `lines`, the latter broken to fit the page.

    `whole` is the right side on one line; `element` over `divisor`, of `ring`, is its value (None for
    trees that were written as they are).  `width` is that of the widest line, in em.  With `left_alone`
    the left side has a line of its own.

    >>> formula = Formula("p", ("a + b", "+ c"), None, None, indents=(0, 1), whole="a + b + c")
    >>> formula.inline(), formula.rows
    ('p = a + b + c', ('p &= a + b', '&\\quad{} + c'))
    """

    lhs: str
    lines: tuple[str, ...]
    element: Element | None
    ring: Ring | None
    divisor: Element | None = None
    whole: str = ""
    indents: tuple[int, ...] = ()
    width: float = 0.0
    relation: str = "="
    left_alone: bool = False

    @property
    def body(self) -> str:
        """The right side as it is printed, line breaks removed: the text for the read-back."""
        return " ".join(self.lines).replace(r" \,", r"\,")

    def inline(self) -> str:
        """The formula on one line, for running text."""
        return f"{self.lhs} {self.relation} {self.whole}" if self.lhs else self.whole

    @property
    def rows(self) -> tuple[str, ...]:
        """The rows of an aligned display, without the ends of rows."""
        indents = self.indents or (0,) * len(self.lines)
        rows, shift = [], 0
        if not self.lhs:
            rows, shift = [f"&{self.lines[0]}"], 0
        elif self.left_alone:
            rows, shift = [f"&{self.lhs}", rf"&\quad {self.relation} {self.lines[0]}"], 1
        else:
            rows = [f"{self.lhs} &{self.relation} {self.lines[0]}"]
        rows += [
            rf"&{_QUAD * (indent + shift)}{{}} {line}"
            for line, indent in zip(self.lines[1:], indents[1:], strict=True)
        ]
        return tuple(row.rstrip() for row in rows)

    def display(self, environment: str = "align", label: str | None = None) -> str:
        r"""The formula as a displayed LaTeX environment; it is numbered if it has a label.

        `environment` is "align", "equation" (several lines are `aligned` within it) or "aligned" (the
        bare block, for a display of one's own).  A display too long for part of a page is an `align`
        whose lines may stand on two pages.  Needs amsmath.
        """
        rows = self.rows
        if environment == "aligned":
            return _block("aligned", " \\\\\n".join(rows))
        star, mark = ("", rf"\label{{{label}}}") if label else ("*", "")
        if environment == "equation" and len(rows) <= PAGE_LINES:
            inner = _block("aligned", " \\\\\n".join(rows)) if len(rows) > 1 else rows[0].replace("&", "", 1)
            return _block("equation" + star, (mark + "\n" + inner).strip())
        if environment not in ("align", "equation"):
            raise ValueError(f"unknown environment {environment!r}")
        ends = [" \\notag \\\\\n" if label else " \\\\\n"] * (len(rows) - 1) + [f" {mark}".rstrip()]
        display = _block("align" + star, "".join(row + end for row, end in zip(rows, ends, strict=True)))
        if len(rows) > PAGE_LINES:
            return f"\\begingroup\\allowdisplaybreaks\n{display}\n\\endgroup"
        return display


def set_formula(
    lhs: str,
    node: Node,
    writer: LatexWriter,
    room: float = LINE,
    relation: str = "=",
    element: Element | None = None,
    ring: Ring | None = None,
    divisor: Element | None = None,
) -> Formula:
    r"""A tree as it is written, set in lines of `room` em; `lhs` is LaTeX, or "" for none.

    >>> from symplant.algebra.expression import Name, Quotient
    >>> from symplant.writing.spelling import Spelling
    >>> writer = LatexWriter(Spelling.of("s", {"k": "k", "m": "m"}))
    >>> print(set_formula("a_{21}", Quotient(Name("k"), Name("m")), writer).display())
    \begin{align*}
    a_{21} &= \frac{k}{m}
    \end{align*}
    """
    left = width(lhs) + RELATION if lhs else 0.0
    written = writer.write(node)
    lines = broken(writer, written, room - left)
    alone = len(lines) > 1 and left > WIDE_LEFT * room
    if alone:
        lines, left = broken(writer, written, room - 1.0, room - 1.0 - RELATION), 1.0
        lines = (lines[0]._replace(width=lines[0].width + RELATION), *lines[1:])
    widest = max(left + line.indent + line.width for line in lines)
    return Formula(
        lhs,
        tuple(line.text for line in lines),
        element,
        ring,
        divisor,
        writer.signed(written)[0],
        tuple(line.indent for line in lines),
        max(widest, width(lhs)),
        relation,
        alone,
    )


def two_sided(left: Node, relation: str, right: Node, writer: LatexWriter, room: float = LINE) -> Formula:
    """A relation between two trees.

    Where the left side is too long to stand in front of an aligned right side, all of it is in `lines`.
    """
    written = writer.write(left)
    lhs, space = writer.signed(written)
    if space + RELATION + writer.signed(writer.write(right))[1] <= room or space <= WIDE_LEFT * room:
        return set_formula(lhs, right, writer, room, relation)
    lines = list(broken(writer, left, room))
    last = lines[-1]
    answer = broken(writer, right, room - RELATION - 1.0)
    first = answer[0]
    if len(answer) == 1 and last.width + last.indent + RELATION + first.width <= room:
        text = f"{last.text} {relation} {first.text}"
        lines[-1] = Line(text, last.width + RELATION + first.width, last.indent)
    else:
        lines.append(Line(f"{relation} {first.text}", RELATION + first.width, 1))
        lines += [line._replace(indent=line.indent + 1) for line in answer[1:]]
    return Formula(
        "",
        tuple(line.text for line in lines),
        None,
        None,
        None,
        f"{lhs} {relation} {writer.text(right)}",
        tuple(line.indent for line in lines),
        max(line.width + line.indent for line in lines),
        relation,
    )


_QUAD = r"\quad"


def _block(environment: str, content: str) -> str:
    return f"\\begin{{{environment}}}\n{content}\n\\end{{{environment}}}"
