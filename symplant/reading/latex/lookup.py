"""A name in a term: looked up among the declared letters, with its exponent."""

from __future__ import annotations

from symplant.algebra.expression import Call, Name, Node, integer
from symplant.errors import InputError
from symplant.reading.latex.groups import Cursor
from symplant.reading.latex.letters import FUNCTION_COMMANDS, FUNCTION_WORDS
from symplant.reading.latex.names import Written, starts_name, take_name
from symplant.reading.latex.powers import powered, read_exponent
from symplant.reading.latex.scope import Operand, Scope
from symplant.reading.latex.tokens import Token, refusal

__all__ = ["read_name"]

_LONGEST_PRODUCT_WITHOUT_GAPS = 3
_LONGEST_NAME = 40  # in items


def read_name(cursor: Cursor, scope: Scope) -> Operand:
    """The declared letter at the cursor, or Euler's number or pi where these are not declared.

    An undeclared one is noted in the scope and the reading goes on.
    """
    first = cursor.peek()
    if isinstance(first, Token) and len(first.word) > 1:
        _refuse_words(first, scope)
    written = _with_increment(take_name(cursor), cursor, scope)
    full = _full(written)
    if written.superscript is not None and full is not None and full in scope.spellings:
        return Operand("name", Name(scope.spellings.name(full), written.column), False, written.column)
    base: Node
    if written.key in scope.spellings:
        base = Name(scope.spellings.name(written.key), written.column)
    elif written.key == r"\mathrm{e}" or (written.key == "e" and written.superscript is not None):
        return Operand("value", _exponential(written, scope), False, written.column)
    elif written.key == r"\pi":
        base = Name("pi", written.column)
    else:
        base = Name(written.key, written.column)
        end = written.raised if written.superscript is not None else written.end
        scope.note(
            written.column, f"undeclared letter {scope.quote(written.column, end)}", _hint(written, scope)
        )
    if written.superscript is None:
        return Operand("name", base, False, written.column)
    value = read_exponent(written.superscript, written.column, written.raised, written.end, scope)
    return Operand("name", powered(base, value, written.raised), True, written.column)


def _full(written: Written) -> str | None:
    try:
        return written.full()
    except InputError:  # a superscript that can be no part of a name
        return None


def _exponential(written: Written, scope: Scope) -> Node:
    if written.superscript is None:
        return Call("exp", integer(1), written.column)
    return Call("exp", scope.expression(written.superscript, written.end), written.column)


def _hint(written: Written, scope: Scope) -> str:
    if written.key == "e":
        return r"Euler's number is \mathrm{e}, or e with an exponent"
    return scope.spellings.hint(written.key)


def _with_increment(written: Written, cursor: Cursor, scope: Scope) -> Written:
    r"""A letter after \Delta or \delta belongs to it if the two are declared as one name."""
    if written.key not in (r"\Delta", r"\delta") or written.superscript is not None:
        return written
    upcoming = cursor.upcoming(_LONGEST_NAME)
    if not upcoming or not starts_name(upcoming[0]):
        return written
    probe = Cursor(upcoming, cursor.end)
    inner = take_name(probe)
    both = inner._replace(key=f"{written.key} {inner.key}", column=written.column)
    if both.key not in scope.spellings and (_full(both) or "") not in scope.spellings:
        return written
    if written.key in scope.spellings:
        reason = f"'{both.key}' is declared as one letter, '{written.key}' as another"
        raise refusal(written.column, reason, rf"write {written.key} \cdot {inner.key} for the product")
    for _ in range(len(upcoming) - probe.left()):
        cursor.take()
    return both


def _refuse_words(first: Token, scope: Scope) -> None:
    word = first.word
    if word in FUNCTION_WORDS:
        hint = rf"write \{word}" if word in FUNCTION_COMMANDS else "separate the letters of a product"
        raise refusal(first.column, f"the word '{word}' in a formula", hint)
    if len(word) > _LONGEST_PRODUCT_WITHOUT_GAPS:
        shown = word if len(word) <= 40 else word[:37] + "..."
        hint = f"separate the letters of a product: {' '.join(word)}" if len(word) <= 10 else ""
        raise refusal(first.column, f"'{shown}' reads two ways: a word or a product", hint)
    if word[0] == "d" and "d" in scope.spellings:
        raise refusal(
            first.column,
            f"'{word}' reads two ways: a differential or a product",
            rf"write d \cdot {word[1:]}",
        )
