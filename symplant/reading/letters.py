"""Names in arithmetic text: which are declared, which are functions, and what the others meant."""

from __future__ import annotations

import unicodedata
from collections.abc import Collection, Iterator, Mapping, Sequence
from itertools import chain

from symplant.algebra.expression import FUNCTIONS
from symplant.errors import Fault
from symplant.reading.suggestions import as_product, did_you_mean, listed, quoted
from symplant.reading.tokens import Kind, Token, normal_form, tokenize

__all__ = ["CONSTANT", "free_letters", "name_faults", "undeclared"]

#: The one constant that has a name.
CONSTANT = "pi"

_OTHER_FUNCTION_NAMES = {
    "ln": "log",
    "arctan": "atan",
    "tg": "tan",
    "tgh": "tanh",
    "sh": "sinh",
    "ch": "cosh",
    "th": "tanh",
    "root": "sqrt",
}
_FUNCTION_LIST = f"functions are {listed(FUNCTIONS, 'and')}"


def undeclared(name: str, letters: Collection[str], place: str) -> Fault:
    """The fault of a letter that nobody declared.

    >>> print(undeclared("ml", ["m1", "k"], "column 7"))
    column 7: undeclared letter 'ml' (did you mean 'm1'?)
    """
    product = as_product(name, letters)
    readings = [reading for reading in (product, _greek(name)) if reading]
    known = (*letters, *FUNCTIONS, CONSTANT)
    meant = did_you_mean(name, known, *(r for r in readings if r == product or r in known))
    if not meant and name == "e":
        meant = "the exponential is exp(...)"
    foreign = "" if name.isascii() else f" ({_described(name)})"
    return Fault(place, f"undeclared letter {quoted(name)}{foreign}", meant or "declare it as a parameter")


def name_faults(tokens: Sequence[Token], letters: Mapping[str, str]) -> Iterator[Fault]:
    """Faults of the names among the tokens; `letters` is keyed by normal form."""
    for token, after in _with_next(tokens):
        if token.kind is not Kind.NAME:
            continue
        name, place = normal_form(token.text), f"column {token.column}"
        called = after is not None and after.kind is Kind.OPEN
        if name in letters or name == CONSTANT:
            if called:
                yield Fault(place, f"{quoted(name)} is no function", f"a product is written {name}*(...)")
        elif name in FUNCTIONS:
            if not called:
                power = "**..." if after is not None and after.text == "**" else ""
                reason = f"function {quoted(name)} without its argument in brackets"
                yield Fault(place, reason, f"write {name}(...){power}")
        elif called:
            yield _unknown_function(name, letters, place)
        else:
            yield undeclared(name, letters, place)


def free_letters(text: str) -> list[str]:
    """The letters that occur in arithmetic text, each once, in the order of appearance.

    Functions and pi are none; nor is a name that is called like a function.

    >>> free_letters("-k/m + sin(alpha)*k")
    ['k', 'm', 'alpha']
    """
    tokens = tokenize(text).tokens
    letters: dict[str, None] = {}
    for token, after in _with_next(tokens):
        name = normal_form(token.text)
        if token.kind is not Kind.NAME or name in FUNCTIONS or name == CONSTANT:
            continue
        if after is None or after.kind is not Kind.OPEN:
            letters.setdefault(name)
    return list(letters)


def _with_next(tokens: Sequence[Token]) -> Iterator[tuple[Token, Token | None]]:
    return zip(tokens, chain(tokens[1:], (None,)), strict=False)


def _unknown_function(name: str, letters: Mapping[str, str], place: str) -> Fault:
    other = _OTHER_FUNCTION_NAMES.get(name.casefold())
    meant = did_you_mean(name, FUNCTIONS, *([other] if other else []))
    if not meant and (product := as_product(name, letters)):
        meant = f"a product is written {product}*(...)"
    return Fault(place, f"unknown function {quoted(name)}", meant or _FUNCTION_LIST)


def _greek(name: str) -> str:
    """The word for a single Greek letter."""
    if len(name) != 1:
        return ""
    words = unicodedata.name(name, "").split()
    if words[:1] != ["GREEK"] or words[2:3] != ["LETTER"] or len(words) != 4:
        return ""
    word = words[3].lower().replace("lamda", "lambda")
    return word if words[1] == "SMALL" else word.capitalize()


def _described(name: str) -> str:
    """The characters that are not plain Latin, since some look as if they were."""
    foreign = next(character for character in name if not character.isascii())
    return f"with U+{ord(foreign):04X} {unicodedata.name(foreign, 'unnamed').lower()}"
