"""What every part of the gate needs to know: the text, the declared letters, the faults found so far."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from itertools import islice

from symplant.algebra.expression import Node, walk
from symplant.errors import Fault, InputError
from symplant.reading.exponents import MAX_PARTS, exact_value
from symplant.reading.latex.groups import Item
from symplant.reading.latex.spellings import Spellings
from symplant.reading.latex.tokens import Token, refusal
from symplant.reading.suggestions import quoted

__all__ = ["Operand", "Scope", "refuse_zero", "unexpected"]

#: Most faults that are listed for one text.
MOST_FAULTS = 20


_HINTS = {
    "=": "one side of a relation is read at a time",
    ",": "write 1.5 for a decimal, or state that decimals have a comma",
    "|": "bars are not read",
    "&": "only a matrix has columns",
    "φ": r"write \phi or \varphi",
    "ϕ": r"write \phi or \varphi",
    "ε": r"write \epsilon or \varepsilon",
    "ϵ": r"write \epsilon or \varepsilon",
    "²": "write ^{2}",
    "³": "write ^{3}",
    "–": "write a minus sign",
    "!": "a factorial is not read",
    r"\pm": "write the two signs out",
    r"\label": "it belongs to a display, not to an expression",
    r"\tag": "it belongs to a display, not to an expression",
    r"\nonumber": "it belongs to a display, not to an expression",
    r"\left": "a bracket is missing after it",
    r"\right": "a bracket is missing after it",
}


@dataclass(slots=True)
class Scope:
    """One reading of one text.  `expression` reads items, up to an end column, as one whole expression."""

    source: str
    first: int
    spellings: Spellings
    expression: Callable[[Sequence[Item], int], Node]
    faults: list[Fault] = field(default_factory=list)
    _noted: set[str] = field(default_factory=set)

    def quote(self, start: int, end: int) -> str:
        """The text between two columns in quotes, shortened, fit to be shown."""
        return quoted(" ".join(self.source[start - self.first : end - self.first].split()))

    def shown(self, item: Item) -> str:
        """The text of an item in quotes."""
        return self.quote(item.column, item.end)

    def trial(self, items: Sequence[Item], end: int) -> Node | None:
        """The tree of items, or None where they cannot be read; nothing is noted."""
        faults, noted = self.faults, self._noted
        self.faults, self._noted = [], set()
        try:
            node = self.expression(items, end)
            return None if self.faults else node
        except InputError:
            return None
        finally:
            self.faults, self._noted = faults, noted

    def note(self, column: int, reason: str, suggestion: str = "") -> None:
        """Notes a fault that lets the reading go on, each reason once."""
        if reason not in self._noted:
            self._noted.add(reason)
            self.faults.append(Fault(f"column {column}", reason, suggestion))
        if len(self.faults) >= MOST_FAULTS:
            raise InputError(self.faults)


@dataclass(frozen=True, slots=True)
class Operand:
    """One factor of a term as read, with what its neighbours need to know about it.

    `kind` is number, fraction (of two whole numbers), name, call (an argument could stand in it), value, or
    bare (a function whose argument has no brackets); `raised` if it has an exponent.
    """

    kind: str
    node: Node
    raised: bool
    column: int


def unexpected(item: Item, scope: Scope) -> InputError:
    """The error of an item that can be no operand."""
    if isinstance(item, Token) and item.kind == "row":
        return refusal(item.column, r"unexpected line break '\\'", "only a matrix has rows")
    text = item.text if isinstance(item, Token) else ""
    what = "unknown command" if text[:1] == "\\" and text[1:].isalpha() else "unexpected"
    return refusal(item.column, f"{what} {scope.shown(item)}", _HINTS.get(text, ""))


def refuse_zero(divisor: Node, column: int) -> None:
    """Raises `InputError` if the divisor is a constant that is zero."""
    if len(list(islice(walk(divisor), MAX_PARTS + 1))) <= MAX_PARTS and exact_value(divisor) == 0:
        raise refusal(column, "division by zero")
