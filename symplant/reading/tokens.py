"""Tokens of arithmetic text.  Every character is accounted for: read, or named in a fault."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from enum import Enum, auto
from fractions import Fraction

from symplant.algebra.expression import FUNCTIONS
from symplant.errors import Fault
from symplant.reading.suggestions import quoted

__all__ = ["Kind", "Token", "Tokens", "column", "is_identifier", "normal_form", "tokenize"]

#: Caps on one number literal: digits before the exponent, and the size of its decimal exponent.
MAX_DIGITS = 400
MAX_DECIMAL_EXPONENT = 400


class Kind(Enum):
    """What a token is."""

    NUMBER = auto()
    NAME = auto()
    OPERATOR = auto()
    OPEN = auto()
    CLOSE = auto()


@dataclass(frozen=True, slots=True)
class Token:
    """A token with the text it stands for; `column` counts from 1.

    `value` is that of a number; one for a literal beyond its caps, which is never evaluated.
    """

    kind: Kind
    text: str
    column: int
    value: Fraction = Fraction(1)


@dataclass(frozen=True, slots=True)
class Tokens:
    """The tokens of a text and what was wrong with it.

    `whole` is false when something was left out that no operator can stand in for: the order of
    the remaining tokens then means nothing, only their names can still be looked at.
    """

    tokens: tuple[Token, ...]
    faults: tuple[Fault, ...]
    whole: bool


_DIGITS = r"[0-9]+(?:_[0-9]+)*"
_NUMBER = re.compile(rf"(?:{_DIGITS}(?:\.(?:{_DIGITS})?)?|\.{_DIGITS})(?:[eE]([+-]?{_DIGITS}))?")
_LEADING_ZEROS = re.compile(r"0[0-9_]*[1-9][0-9_]*")
_STRING = re.compile(r"'[^']*'|\"[^\"]*\"")
_OPERATOR = re.compile(r"\*\*|[-+*/]")
_FOREIGN = re.compile(r"//|==|<=|>=|!=|:=|->|<<|>>|&&|\|\||\.\.\.|.", re.DOTALL)
_MIDDLE_DOTS = "\u00b7\u0387"  # Python takes them for parts of a name; here they read as a product

# Signs of other notations that have one arithmetic meaning: named in a fault, then read as meant,
# so that the rest of the entry can be looked at too.
_STAND_INS = {
    "^": "**",
    "//": "/",
    "\u2212": "-",
    "\u2013": "-",
    "\u2014": "-",
    "\u00d7": "*",
    "\u00b7": "*",
    "\u0387": "*",
    "\u22c5": "*",
    "\u2219": "*",
    "\u2217": "*",
    "\u00f7": "/",
    "\u2215": "/",
    "\u2044": "/",
}
_HINTS = {
    ",": "a decimal has a point: 1.5; a function has one argument",
    "[": "group with round brackets ( )",
    "]": "group with round brackets ( )",
    "{": "group with round brackets ( )",
    "}": "group with round brackets ( )",
    "'": "name a primed letter by a word, such as k_prime",
    "%": "write a percentage as a decimal",
    "\\": "text with a backslash is LaTeX, which is read as a whole entry",
    "!": "write the factorial as its number",
    "\u00a0": "type a plain space",
}
_SUPERSCRIPTS = {
    sign: str(digit)
    for digit, sign in enumerate("\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076\u2077\u2078\u2079")
}
_ROOT = "\u221a"
_COMPARISONS = frozenset(("=", "==", "<", ">", "<=", ">=", "!=", ":=", "\u2264", "\u2265", "\u2260"))


def normal_form(name: str) -> str:
    """A name as Python compares names: compatibility characters replaced (NFKC)."""
    return name if name.isascii() else unicodedata.normalize("NFKC", name)


def is_identifier(name: str) -> bool:
    """Whether a text can be a letter: a Python identifier, keywords included, middle dots not.

    >>> is_identifier("lambda"), is_identifier("k_1"), is_identifier("1k"), is_identifier("a b")
    (True, True, False, False)
    """
    return normal_form(name).isidentifier() and not any(dot in name for dot in _MIDDLE_DOTS)


def column(position: int) -> str:
    """The place of a character, counted from 0, in the words of a fault."""
    return f"column {position + 1}"


def tokenize(text: str) -> Tokens:
    """The tokens of arithmetic text, with a fault for everything that is none.

    >>> [token.text for token in tokenize("-k/m**2").tokens]
    ['-', 'k', '/', 'm', '**', '2']
    >>> tokenize("k^2").faults[0].suggestion
    "write '**'"
    """
    tokens: list[Token] = []
    faults: list[Fault] = []
    whole = True
    position = 0
    while position < len(text):
        character = text[position]
        if character in " \t\r\n":
            position += 1
        elif character.isidentifier():
            end = _name_end(text, position)
            tokens.append(Token(Kind.NAME, text[position:end], position + 1))
            position = end
        elif number := _NUMBER.match(text, position):
            troubles = _number_faults(number)
            faults.extend(troubles)
            value = Fraction(1) if troubles else Fraction(number.group().replace("_", ""))
            tokens.append(Token(Kind.NUMBER, number.group(), position + 1, value))
            position = number.end()
        elif operator := _OPERATOR.match(text, position):
            # Python divides with // as well; it rounds, so it is none of ours.
            sign = "//" if text.startswith("//", position) else operator.group()
            if sign in _STAND_INS:
                faults.append(_stand_in_fault(sign, position))
            tokens.append(Token(Kind.OPERATOR, _STAND_INS.get(sign, sign), position + 1))
            position += len(sign)
        elif character in "()":
            tokens.append(Token(Kind.OPEN if character == "(" else Kind.CLOSE, character, position + 1))
            position += 1
        elif character in _STAND_INS:
            faults.append(_stand_in_fault(character, position))
            tokens.append(Token(Kind.OPERATOR, _STAND_INS[character], position + 1))
            position += 1
        else:
            fault, position = _foreign(text, position)
            faults.append(fault)
            whole = False
    return Tokens(tuple(tokens), tuple(faults), whole)


def _name_end(text: str, start: int) -> int:
    end = start + 1
    while end < len(text) and text[end] not in _MIDDLE_DOTS and f"a{text[end]}".isidentifier():
        end += 1
    return end


def _number_faults(number: re.Match[str]) -> list[Fault]:
    text, exponent = number.group(), number.group(1)
    place = column(number.start())
    mantissa = text if exponent is None else text[: -len(exponent) - 1]
    faults = []
    if (digits := sum(map(str.isdigit, mantissa))) > MAX_DIGITS:
        faults.append(Fault(place, f"number of {digits} digits", f"at most {MAX_DIGITS} are read"))
    if exponent is not None and _is_beyond(exponent, MAX_DECIMAL_EXPONENT):
        limit = f"the power of ten may be at most {MAX_DECIMAL_EXPONENT} either way"
        faults.append(Fault(place, f"number {quoted(text)} out of range", limit))
    if _LEADING_ZEROS.fullmatch(text):
        plain = text.lstrip("0_")
        faults.append(Fault(place, f"number {quoted(text)} with leading zeros", f"write {quoted(plain)}"))
    return faults


def _is_beyond(exponent: str, limit: int) -> bool:
    # Length first: an exponent of thousands of digits must not become an integer.
    digits = exponent.replace("_", "").lstrip("+-").lstrip("0")
    return len(digits) > len(str(limit)) or int(digits or "0") > limit


def _stand_in_fault(sign: str, position: int) -> Fault:
    if sign == "//":
        return Fault(column(position), "'//' divides and rounds", "write '/'")
    return Fault(column(position), f"{_named(sign)} is no operator here", f"write {quoted(_STAND_INS[sign])}")


def _foreign(text: str, position: int) -> tuple[Fault, int]:
    """The fault of something that is not arithmetic, and where the text goes on."""
    place, character = column(position), text[position]
    if string := _STRING.match(text, position):
        reason = f"text in quotes, {quoted(string.group()[1:-1])}, is not arithmetic"
        return Fault(place, reason), string.end()
    if character == "." and position + 1 < len(text) and text[position + 1].isidentifier():
        end = _name_end(text, position + 1)
        name = text[position + 1 : end]
        hint = f"write {name} alone" if name in FUNCTIONS or name == "pi" else ""
        return Fault(place, f"{quoted('.' + name)} asks for an attribute, which is not arithmetic", hint), end
    if character in _SUPERSCRIPTS:
        end = position
        while end < len(text) and text[end] in _SUPERSCRIPTS:
            end += 1
        power = "".join(_SUPERSCRIPTS[digit] for digit in text[position:end])
        hint = f"write {quoted('**' + power)}"
        return Fault(place, f"{quoted(text[position:end])} is not read as a power", hint), end
    if character == _ROOT:
        return Fault(place, f"{_named(character)} is not read", "write sqrt(...)"), position + 1
    match = _FOREIGN.match(text, position)
    sign = character if match is None else match.group()
    if sign in _COMPARISONS:
        reason, hint = f"{quoted(sign)} compares or assigns", "an entry is one expression"
    else:
        reason, hint = f"{_named(sign)} is not arithmetic", _HINTS.get(sign, "")
    return Fault(place, reason, hint), position + len(sign)


def _named(sign: str) -> str:
    if sign.isascii() and sign.isprintable():
        return quoted(sign)
    return f"{quoted(sign)} (U+{ord(sign[0]):04X} {unicodedata.name(sign[0], 'unnamed').lower()})"
