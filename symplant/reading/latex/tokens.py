"""LaTeX text to tokens: every character is accounted for, spacing and comments are left out.

Columns count characters of the text from 1, line breaks included, so that a fault can point at its place.
"""

from __future__ import annotations

import re
from functools import cache
from typing import NamedTuple

from symplant.errors import Fault, InputError
from symplant.reading.latex.letters import words
from symplant.reading.suggestions import quoted

__all__ = ["MAX_LENGTH", "TYPED_GREEK", "Token", "refusal", "tokenise"]

#: Longest text that is read, in characters.
MAX_LENGTH = 100_000


class Token(NamedTuple):
    """One sign of the text; `column` is its first character, `end` the one after its last.

    `kind` is number, letter, command, symbol, row (a line break), begin, end (an environment, `text` is its
    name), left or right (a sized bracket, `text` is the bracket).  `word` is set on the first letter of a run
    of letters written without a gap: the whole run.
    """

    kind: str
    text: str
    column: int
    end: int
    word: str = ""


#: Commands that mean the same are one command from here on.
_ALIASES = {
    **dict.fromkeys((r"\dfrac", r"\tfrac", r"\cfrac", r"\nicefrac", r"\sfrac"), r"\frac"),
    **dict.fromkeys((r"\mathup", r"\operatorname", r"\mbox", r"\textnormal"), r"\mathrm"),
    **dict.fromkeys((r"\text", r"\textrm", r"\textup"), r"\mathrm"),
    **dict.fromkeys((r"\lvert", r"\rvert", r"\vert"), "|"),
    r"\bm": r"\boldsymbol",
    r"\ast": "*",
    r"\prime": "'",
    r"\lbrace": r"\{",
    r"\rbrace": r"\}",
    r"\lbrack": "[",
    r"\rbrack": "]",
    r"\colon": ":",
}

#: Greek letters as typed, with their names; phi and epsilon have two shapes each and are not among them.
TYPED_GREEK = {
    entry[0]: entry[1:]
    for entry in words(
        "αalpha βbeta γgamma δdelta ζzeta ηeta θtheta ιiota κkappa λlambda μmu νnu ξxi πpi ρrho σsigma τtau",
        "υupsilon χchi ψpsi ωomega ΓGamma ΔDelta ΘTheta ΛLambda ΞXi ΠPi ΣSigma ΥUpsilon ΦPhi ΨPsi ΩOmega",
        "ϑvartheta ϱvarrho ςvarsigma ϰvarkappa ℓell",
    )
}

#: Typed characters with one LaTeX meaning.
_TYPED = {
    **{letter: "\\" + name for letter, name in TYPED_GREEK.items()},
    "\N{MICRO SIGN}": r"\mu",
    "\N{OHM SIGN}": r"\Omega",
    "−": "-",
    "·": r"\cdot",
    "⋅": r"\cdot",
    "∙": r"\cdot",
    "×": r"\times",
    "÷": r"\div",
    "∕": "/",
    "′": "'",
    "≤": r"\le",
    "≥": r"\ge",
    "≠": r"\ne",
}

_SPACING = "|".join(
    words(
        "quad qquad enspace enskip thinspace medspace thickspace negthinspace",
        "displaystyle textstyle scriptstyle allowbreak nobreak",
    )
)

_BRACKET = r"\\[{}|]|\\(?:[lr](?:brace|brack|vert|Vert|angle|ceil|floor)|vert)(?![A-Za-z])|[()\[\]|./<>]"


@cache
def _pattern(decimal_comma: bool) -> re.Pattern[str]:
    point = r"(?:\.|,|\{,\})" if decimal_comma else r"\."
    return re.compile(
        rf"""
          (?P<skip> \s+ | ~ | %[^\n]* | \\[,;:!>\s] | \\(?:{_SPACING})(?![A-Za-z])
                  | \\[bB]igg?[lrm]?(?![A-Za-z])(?=\s*(?:{_BRACKET})) )
        | (?P<fence> \\(?P<side>left|right)(?![A-Za-z]) \s* (?P<bracket>{_BRACKET}) )
        | (?P<row> \\\\\*? (?: \s*\[\s*-?(?:[0-9]+\.?[0-9]*|\.[0-9]+)\s*(?:[a-z]{{2}}|\\[A-Za-z]+)\s*\] )?
                 | \\(?:cr|tabularnewline|newline)(?![A-Za-z]) )
        | (?P<environment> \\(?P<edge>begin|end) \s* \{{ \s* (?P<name>[A-Za-z]+\*?) \s* \}} )
        | (?P<number> (?: [0-9]{{1,3}}(?:\\,[0-9]{{3}})+(?![0-9]) (?:{point}[0-9]+)?
                        | [0-9]+(?:{point}[0-9]+)? | \.[0-9]+ ) (?:[eE][+-]?[0-9]+)? )
        | (?P<command> \\(?:[A-Za-z]+|.) )
        | (?P<letters> [A-Za-z]+ )
        | (?P<symbol> . )
        """,
        re.VERBOSE | re.DOTALL,
    )


def refusal(column: int, reason: str, suggestion: str = "") -> InputError:
    """The error of one fault at a character position.

    >>> print(refusal(3, "unexpected '='"))
    column 3: unexpected '='
    """
    return InputError([Fault(f"column {column}", reason, suggestion)])


def _is_digit_before(text: str, position: int) -> bool:
    return position > 0 and text[position - 1].isdecimal()


def tokenise(text: str, *, decimal_comma: bool = False, column: int = 1) -> list[Token]:
    r"""The tokens of `text`; its first character has the given column.

    Raises `InputError` if `text` is no text or too long; what a token means is for others to judge.

    >>> [token.text for token in tokenise(r"1.5\,k_{\mathrm{r}} % stiffness")]
    ['1.5', 'k', '_', '{', '\\mathrm', '{', 'r', '}', '}']
    """
    if not isinstance(text, str):
        raise refusal(column, f"LaTeX text expected, not {type(text).__name__}")
    if len(text) > MAX_LENGTH:
        most = f"at most {MAX_LENGTH} are read"
        raise refusal(column + MAX_LENGTH, f"a text of {len(text)} characters", most)
    tokens: list[Token] = []
    for match in _pattern(decimal_comma).finditer(text):
        start, end = match.start() + column, match.end() + column
        kind, found = match.lastgroup or "", match[0]
        if kind == "number":
            tokens.append(Token(kind, found, start, end))
        elif kind == "row":
            tokens.append(Token(kind, r"\\", start, end))
        elif kind == "letters":
            tokens.append(Token("letter", found[0], start, start + 1, found))
            tokens += [Token("letter", found[i], start + i, start + i + 1) for i in range(1, len(found))]
        elif kind == "environment":
            tokens.append(Token(match["edge"], match["name"], start, end))
        elif kind == "fence":
            tokens.append(Token(match["side"], _ALIASES.get(match["bracket"], match["bracket"]), start, end))
        elif kind == "skip":
            if found[0] == "%" and found[1:].strip() and _is_digit_before(text, match.start()):
                raise refusal(start, f"{quoted(found)} reads two ways: a comment or percent", r"write \%")
        else:
            found = _ALIASES.get(found, _TYPED.get(found, found))
            kind = "command" if found[0] == "\\" and found[1:].isalpha() else "symbol"
            tokens.append(Token(kind, found, start, end))
    return tokens
