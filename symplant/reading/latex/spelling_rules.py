"""The LaTeX spelling of an identifier for which none was declared."""

from __future__ import annotations

import re
import unicodedata

from symplant.reading.latex.letters import GREEK, words
from symplant.reading.latex.tokens import TYPED_GREEK

__all__ = ["default_spelling"]

_ACCENTS = frozenset(("dddot", "ddot", "dot", "hat", "bar", "tilde", "vec"))
_MARKS = {"prime": "'", "star": "^{*}"}

#: Identifiers that are the name of one letter.
_NAMED = GREEK | frozenset(words("varepsilon vartheta varphi varrho varsigma varkappa ell hbar"))

#: A letter, an accent's name and perhaps a number, without gaps: x1dot, thetaddot, xhat2.
_ACCENTED = re.compile(
    rf"({'|'.join(sorted(_NAMED, key=len, reverse=True))}|[A-Za-z])([0-9]*)"
    rf"({'|'.join((*sorted(_ACCENTS, key=len, reverse=True), *_MARKS))})([0-9]*)"
)

#: Indices that people write at a letter without a gap, as in kmax or xref; other small words are one word.
_TAILS = frozenset(
    words(
        "max min ref eq in out on off tot nom sat dc ac load mot rot res crit eff del rel abs opt lim set",
        "ext int",
    )
)

#: Capitalised, these are names that are words, not a letter with an index.
_WORDS = frozenset(
    words(
        "mass gain area force speed time length power inertia damping stiffness torque voltage current",
        "height width radius angle delay ratio rate volume pressure density flow heat",
        "alpha beta eta zeta kappa",
    )
)

_SHORT_INDEX = re.compile(r"[0-9]*[A-Za-z]?|[A-Za-z][0-9]+|[xyzijk]{2}")


def default_spelling(name: str) -> str:
    r"""The LaTeX spelling of an identifier: a letter with an index, an accent, or a word in roman type.

    It can always be read back as one name.  Two identifiers may get the same spelling (k1 and k_1).

    >>> [default_spelling(name) for name in ("m1", "k_r", "omega0", "Kt", "beta")]
    ['m_{1}', 'k_{r}', '\\omega_{0}', 'K_{t}', '\\beta']
    >>> [default_spelling(name) for name in ("Jmot", "R_load", "x_dot", "mass")]
    ['J_{\\mathrm{mot}}', 'R_{\\mathrm{load}}', '\\dot{x}', '\\mathrm{mass}']
    """
    name = unicodedata.normalize("NFKC", name)
    first, *others = [piece for piece in name.split("_") if piece] or [""]
    if not first:
        return rf"\mathrm{{{name.replace('_', chr(92) + '_')}}}"
    accent = next((piece for piece in others if piece in _ACCENTS or piece in _MARKS), "")
    glued = _ACCENTED.fullmatch(first)
    if accent:
        others.remove(accent)
        base, index = _base(first)
    elif glued:
        base, accent, index = _letter(glued[1]), glued[3], glued[2] + glued[4]
    else:
        base, index = _base(first)
    indices = [part for part in (index, *others) if part]
    dressed = rf"\{accent}{{{base}}}" if accent in _ACCENTS else base
    return dressed + (f"_{{{_index(indices)}}}" if indices else "") + _MARKS.get(accent, "")


def _letter(text: str) -> str:
    """A single letter, a Greek letter, or a word in roman type."""
    if text in _NAMED:
        return "\\" + text
    return text if len(text) == 1 and text.isascii() and text.isalpha() else rf"\mathrm{{{text}}}"


def _base(piece: str) -> tuple[str, str]:
    """What the name's first piece says: its letter, and the index written at it without a gap."""
    if piece[0] in TYPED_GREEK:
        return "\\" + TYPED_GREEK[piece[0]], piece[1:]
    greek = max((letter for letter in _NAMED if piece.startswith(letter)), key=len, default="")
    rest = piece[len(greek) :]
    if greek and (not rest or rest[0].isdigit() or rest[0].isupper() or _may_follow(greek, rest)):
        return "\\" + greek, rest
    if not (piece[0].isascii() and piece[0].isalpha()):
        return _letter(piece), ""
    letter, rest = piece[0], piece[1:]
    if rest[:1].isdigit() or _SHORT_INDEX.fullmatch(rest) or rest in _TAILS or rest in _NAMED:
        return letter, rest
    word = piece.rstrip("0123456789")
    if word.lower() in _WORDS or word.islower():
        return _letter(word), piece[len(word) :]
    return letter, rest


def _may_follow(greek: str, rest: str) -> bool:
    """Whether small letters may follow a Greek name: omegamax, mus and taum, but pin and pitch are words."""
    return len(greek) >= 5 or (len(rest) == 1 and greek != "pi")


def _index(indices: list[str]) -> str:
    """The index: letters and numbers in italic as single signs, words in roman."""
    signs = []
    for index in indices:
        letter = index.rstrip("0123456789")
        if letter in _NAMED:
            signs.append(rf"\{letter} {index[len(letter) :]}".strip())
        elif _SHORT_INDEX.fullmatch(index):
            signs.append(index)
    if len(signs) == len(indices):
        return ",".join(signs)
    return rf"\mathrm{{{','.join(indices)}}}"
