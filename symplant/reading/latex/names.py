"""Names: where one begins and ends, and the one normal form of all ways to write it."""

from __future__ import annotations

import re
from collections.abc import Sequence
from functools import lru_cache
from typing import NamedTuple

from symplant.reading.latex.groups import Cursor, Group, Item, grouped
from symplant.reading.latex.letters import DRESSES, LETTER_COMMANDS
from symplant.reading.latex.tokens import Token, refusal, tokenise
from symplant.reading.suggestions import quoted

__all__ = [
    "Written",
    "canonical_spelling",
    "normal_form",
    "starts_name",
    "take_name",
    "take_script",
]

_MARKS = frozenset("+-*/,.:;|<>=!'")
_REFUSED_IN_NAMES = frozenset((r"\frac", r"\over", r"\sqrt", r"\left", r"\right"))
_ENDS_IN_COMMAND = re.compile(r"\\[A-Za-z]+$")


class Written(NamedTuple):
    """A name as it stands in a text: its normal form without the superscript, and the superscript's items.

    `superscript` is None where there is none; `column` to `end` is its place, `raised` the superscript's.
    """

    key: str
    superscript: Sequence[Item] | None
    column: int
    end: int
    raised: int

    def full(self) -> str:
        """The normal form with the superscript as a part of the name."""
        return self.key if self.superscript is None else f"{self.key}^{{{normal_form(self.superscript)}}}"


def canonical_spelling(text: str) -> str:
    r"""The normal form of a declared spelling: two spellings that print alike have the same one.

    Raises `InputError` if the text is not one name.

    >>> canonical_spelling(r"K_\text{t}"), canonical_spelling(r"K _ {\rm t}")
    ('K_{\\mathrm{t}}', 'K_{\\mathrm{t}}')
    """
    if not isinstance(text, str):
        raise refusal(1, f"a spelling must be text, not {type(text).__name__}")
    return _canonical(text)


@lru_cache(maxsize=4096)
def _canonical(text: str) -> str:
    items = grouped(tokenise(text))
    cursor = Cursor(items, len(text) + 1)
    if not items:
        raise refusal(1, "an empty spelling")
    if not starts_name(cursor.peek()):
        raise refusal(
            1, f"{quoted(text)} is not one name", r"a name is a letter, which may have an index: K_{t}"
        )
    written = take_name(cursor)
    if written.key in (r"\Delta", r"\delta") and written.superscript is None and starts_name(cursor.peek()):
        inner = take_name(cursor)
        written = inner._replace(key=f"{written.key} {inner.key}")
    if cursor.peek() is not None:
        bare = text.strip()
        hint = rf"write \mathrm{{{bare}}}" if bare.isalpha() else "more than a letter is one name as an index"
        raise refusal(cursor.column(), f"{quoted(text)} is not one name", hint)
    superscript = normal_form(written.superscript or ())
    if superscript.strip("+-").isdecimal():
        raise refusal(
            written.raised, f"{quoted(text)} is a power, not a name", "write the number as an index"
        )
    return written.full()


def starts_name(item: Item | None) -> bool:
    """Whether a name can begin with this item."""
    if isinstance(item, Group):
        return item.kind == "{" and bool(item.items) and _is(item.items[0], r"\rm")
    if item is None:
        return False
    return item.kind == "letter" or item.text in LETTER_COMMANDS or item.text in DRESSES


def take_name(cursor: Cursor) -> Written:
    """The name at the cursor, which is passed; call it only where `starts_name` holds."""
    column, base = cursor.column(), cursor.take()
    end = base.end
    if isinstance(base, Group):
        key = normal_form(base.items)
    elif base.text in DRESSES:
        key, end = _dressed(base, cursor)
    else:
        key = base.text
    index: str | None = None
    superscript: Sequence[Item] | None = None
    primes, raised = "", 0
    while (mark := cursor.text()) in ("_", "^", "'"):
        sign = cursor.take()
        if mark == "'":
            if superscript is not None:
                raise refusal(sign.column, f"prime after a superscript of '{key}'")
            primes, end = primes + "'", sign.end
            continue
        argument, end = take_script(cursor, sign)
        if mark == "_" and index is None:
            index = normal_form(argument)
        elif mark == "^" and superscript is None and not primes and all(_is(item, "'") for item in argument):
            primes = "'" * len(argument)
        elif mark == "^" and superscript is None:
            superscript, raised = argument, sign.column
        else:
            raise refusal(sign.column, f"second '{mark}' after '{key}'")
    key += (f"_{{{index}}}" if index is not None else "") + primes
    return Written(key, superscript, column, end, raised)


def normal_form(items: Sequence[Item]) -> str:
    r"""The normal form of what stands in an index, a superscript or under an accent."""
    if items and _is(items[0], r"\rm"):
        return rf"\mathrm{{{normal_form(items[1:])}}}"
    parts: list[str] = []
    cursor = Cursor(items, 0)
    while cursor.peek() is not None:
        item = cursor.take()
        if isinstance(item, Group):
            parts.append(_bracketed(item))
        elif item.text in ("_", "^"):
            parts.append(f"{item.text}{{{normal_form(take_script(cursor, item)[0])}}}")
        elif item.text in DRESSES:
            parts.append(_dressed(item, cursor)[0])
        elif _allowed_in_index(item):
            parts.append(item.text.replace("{,}", ","))
        else:
            raise refusal(item.column, f"unexpected {quoted(item.text)} in a name")
    for i, part in enumerate(parts[:-1]):
        if _ENDS_IN_COMMAND.search(part[-40:]) and parts[i + 1][:1].isalpha():
            parts[i] += " "
    return "".join(parts)


def _bracketed(group: Group) -> str:
    if group.environment or group.sized or group.kind not in ("{", "(", "["):
        raise refusal(group.column, f"unexpected '{group.kind}' in a name")
    inner = normal_form(group.items)
    if group.kind == "{":
        return inner
    return f"({inner})" if group.kind == "(" else f"[{inner}]"


def _dressed(dress: Token, cursor: Cursor) -> tuple[str, int]:
    item = cursor.peek()
    argument: Sequence[Item]
    if isinstance(item, Group) and item.kind == "{" and item.items:
        argument = item.items
    elif isinstance(item, Token) and (item.kind == "letter" or item.text in LETTER_COMMANDS):
        argument = [item]
    else:
        raise refusal(dress.column, f"'{dress.text}' without a letter under it")
    return f"{dress.text}{{{normal_form(argument)}}}", cursor.take().end


def take_script(cursor: Cursor, sign: Item) -> tuple[Sequence[Item], int]:
    """The argument of an index or superscript sign just passed, and where it ends."""
    if cursor.peek() is None:
        raise refusal(sign.column, "an index or exponent is missing")
    item = cursor.take()
    if isinstance(item, Group):
        if item.kind == "{" and item.items:
            return item.items, item.end
        what = "an empty" if item.kind == "{" else f"'{item.kind}' as an"
        raise refusal(item.column, f"{what} index or exponent", "put it in braces")
    if item.text in DRESSES and isinstance(cursor.peek(), Group):
        argument = cursor.take()
        return [item, argument], argument.end
    if item.text in ("_", "^", "&") or item.kind in ("row", "left", "right"):
        raise refusal(item.column, f"unexpected '{item.text}' in an index or exponent")
    if item.kind == "number" and len(item.text) > 1 and not (_is(sign, "_") and item.text.isdecimal()):
        hint = f"write {{{item.text}}}: TeX takes the first sign only"
        raise refusal(item.column, f"'{item.text}' without braces", hint)
    return [item], item.end


def _allowed_in_index(token: Token) -> bool:
    if token.kind == "command":
        return token.text.isascii() and token.text not in _REFUSED_IN_NAMES
    if token.kind in ("number", "letter"):
        return True
    if token.kind != "symbol":
        return False
    return token.text in _MARKS or token.text == r"\_" or ("a" + token.text).isidentifier()


def _is(item: Item, text: str) -> bool:
    return isinstance(item, Token) and item.text == text
