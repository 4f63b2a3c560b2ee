"""The declared letters by their LaTeX spellings."""

from __future__ import annotations

from collections.abc import Mapping
from difflib import get_close_matches

from symplant.errors import Fault, InputError
from symplant.reading.latex.names import canonical_spelling
from symplant.reading.suggestions import did_you_mean, listed

__all__ = ["Spellings"]

_MOST_LISTED = 8
_LONGEST_COMPARED = 80
_LOOKALIKES = str.maketrans("lio", "110")  # taken for each other on a screen


class Spellings:
    """The declared letters by the normal forms of their spellings.

    Raises `InputError` with a fault for every spelling that is not one name or is declared for two letters.
    """

    def __init__(self, declared: Mapping[str, str]) -> None:
        self._names: dict[str, str] = {}
        self._written: dict[str, str] = {}
        faults: list[Fault] = []
        for spelling, name in declared.items():
            try:
                key = canonical_spelling(spelling)
            except InputError as error:
                faults += error.at(f"spelling of {name}").faults
                continue
            if self._names.setdefault(key, name) != name:
                reason = f"'{spelling}' is already the spelling of {self._names[key]}"
                faults.append(Fault(f"spelling of {name}", reason))
            self._written.setdefault(key, spelling)
        if faults:
            raise InputError(faults)

    def __contains__(self, key: str) -> bool:
        return key in self._names

    def letters(self) -> set[str]:
        """The declared names."""
        return set(self._names.values())

    def name(self, key: str) -> str:
        """The declared name of a normal form; `KeyError` if there is none."""
        return self._names[key]

    def hint(self, key: str) -> str:
        """What may have been meant by an undeclared normal form, as a suggestion."""
        # Braces and typefaces are left out, or all letters with an index would be close to each other.
        bare = {_bare(known): known for known in self._names}
        near = get_close_matches(_bare(key)[:_LONGEST_COMPARED], [one for one in bare if len(one) > 1], 2)
        near = [_bare(key)] if _bare(key) in bare else near
        offer = did_you_mean(key, (), *(self._written[bare[one]] for one in near))
        few = 0 < len(self._names) <= _MOST_LISTED
        return offer or (f"declared are {listed(self._written.values(), 'and')}" if few else "")


def _bare(key: str) -> str:
    for mark in (r"\mathrm", "{", "}", "_", " "):
        key = key.replace(mark, "")
    return key.casefold().translate(_LOOKALIKES)
