"""What to say beside a fault: the text at fault, quoted safely, and the word that was perhaps meant."""

from __future__ import annotations

from collections.abc import Collection, Iterable
from difflib import get_close_matches
from functools import lru_cache

__all__ = ["as_product", "did_you_mean", "listed", "quoted"]

_LONGEST_SHOWN = 40
# Characters that are taken for each other on a screen or typed for each other in haste.
_LOOKALIKES = str.maketrans({"i": "1", "l": "1", "o": "0", "_": None})


def quoted(text: str) -> str:
    """A piece of user text in quotes, cut if long, with nothing in it that a terminal would obey.

    >>> print(quoted("ml"), quoted("a" * 60), quoted(chr(27) + "[2J"))
    'ml' 'aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa...' '\\x1b[2J'
    """
    if len(text) > _LONGEST_SHOWN:
        text = text[: _LONGEST_SHOWN - 3] + "..."
    shown = "".join(sign if sign.isprintable() else repr(sign)[1:-1] for sign in text)
    return f'"{shown}"' if "'" in shown and '"' not in shown else f"'{shown}'"


def listed(words: Iterable[str], last: str = "or") -> str:
    """Words in a row as prose has them.

    >>> listed(["A", "B", "C"])
    'A, B or C'
    """
    every = list(words)
    if len(every) < 2:
        return "".join(every)
    return f"{', '.join(every[:-1])} {last} {every[-1]}"


def did_you_mean(word: str, known: Iterable[str], *first: str) -> str:
    """A question that offers what `word` was perhaps meant to be, or nothing at all.

    `first` holds readings found by other means; they stand in front.

    >>> did_you_mean("ml", ["m1", "k", "c"]), did_you_mean("postive", ["positive", "negative"])
    ("did you mean 'm1'?", "did you mean 'positive'?")
    >>> did_you_mean("q", ["m", "k"])
    ''
    """
    # Sorted, for letters may come as a set: the question must be the same in every run.
    return _question(word, tuple(sorted(set(known))), first)


@lru_cache(maxsize=1024)
def _question(word: str, known: tuple[str, ...], first: tuple[str, ...]) -> str:
    candidates = [other for other in known if other != word]
    like = _skeleton(word)
    offers = dict.fromkeys(first)
    offers |= dict.fromkeys(other for other in candidates if _skeleton(other) == like)
    # One letter is close to no other: 'q' for 'k' would be a guess, not a help.
    if len(word) > 1:
        near = get_close_matches(word[:80], [other[:80] for other in candidates], n=2, cutoff=0.6)
        offers |= dict.fromkeys(other for other in near if len(other) > 1)
    shown = [quoted(offer) for offer in list(offers)[:2]]
    return f"did you mean {listed(shown)}?" if shown else ""


def as_product(word: str, letters: Collection[str]) -> str:
    """`word` taken apart into declared letters with the fewest factors, or nothing.

    >>> as_product("mg", {"m", "g", "k"}), as_product("ml", {"m"})
    ('m*g', '')
    """
    if len(word) > _LONGEST_SHOWN:
        return ""
    best: list[tuple[str, ...] | None] = [()] + [None] * len(word)
    for end in range(1, len(word) + 1):
        for start in range(end):
            before, piece = best[start], word[start:end]
            if before is None or piece not in letters:
                continue
            shortest = best[end]
            if shortest is None or len(before) + 1 < len(shortest):
                best[end] = (*before, piece)
    factors = best[-1] or ()
    return "*".join(factors) if len(factors) > 1 else ""


def _skeleton(word: str) -> str:
    return word.casefold().translate(_LOOKALIKES)
