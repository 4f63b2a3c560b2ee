r"""How the names of a plant are spelled in LaTeX, and back from the spelling to the name."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import TYPE_CHECKING

from symplant.algebra.expression import Name, walk
from symplant.errors import Fault, InputError
from symplant.reading.latex import canonical_spelling, default_spelling

if TYPE_CHECKING:
    from symplant.plant.model import Model

__all__ = ["Spelling"]

_GROUP = re.compile(r"\{[^{}]*\}")
_UPRIGHT = re.compile(
    r"\\(?:mathrm|text|operatorname|textrm|mathup|mbox|mathsf|mathtt)\s*\{\s*[^\s{}]{2,}\s*\}"
)


class Spelling:
    r"""LaTeX spellings of the letters, the polynomial variable and `pi`; no two names share one.

    `inverse` maps spellings to names, as the reader wants them.  `euler` is how the base of the
    exponential function is written: "e", \mathrm{e} where a letter is spelled e, "" where both are taken
    (then exponentials are written with \exp).

    >>> spelling = Spelling.of("s", {"m1": "m_{1}", "e": "e"})
    >>> spelling["m1"], spelling.inverse["m_{1}"], spelling.euler
    ('m_{1}', 'm1', '\\mathrm{e}')
    """

    def __init__(self, model: Model) -> None:
        """The spellings of a plant.  Errors: InputError with a fault for every spelling that clashes."""
        letters = {p.name: p.latex or default_spelling(p.name) for p in model.parameters}
        constant = any(
            isinstance(part, Name) and part.name == "pi"
            for matrix in model.matrices.values()
            for row in matrix
            for entry in row
            for part in walk(entry)
        )
        self._signals = {
            signal.name: signal.latex or default_spelling(signal.name)
            for signal in (*model.states, *model.inputs, *model.outputs)
        }
        self._take(model.variable, letters, constant, model.source)

    @classmethod
    def of(cls, variable: str, letters: Mapping[str, str], *, constant: bool = True) -> Spelling:
        """Spellings of letters without a plant; `constant` tells whether `pi` is used."""
        spelling = cls.__new__(cls)
        spelling._signals = {}
        spelling._take(variable, letters, constant, "")
        return spelling

    def _take(self, variable: str, letters: Mapping[str, str], constant: bool, source: str) -> None:
        self.variable = variable
        self.names: dict[str, str] = {**letters, variable: variable}
        if constant:
            self.names["pi"] = r"\pi"
        owners: dict[str, str] = {variable: variable}
        if constant:
            owners[r"\pi"] = "pi"
        self._canonical: dict[str, str] = {v: k for k, v in owners.items()}
        faults: list[Fault] = []
        for name, latex in letters.items():
            place = f"parameters.{name}.latex"
            try:
                canonical = canonical_spelling(latex)
            except InputError as error:
                faults += error.at(place, source).faults
                continue
            self._canonical[name] = canonical
            other = owners.setdefault(canonical, name)
            if other != name:
                whose = f"that of {other}" if other in letters else f"kept for {other}"
                hint = f'give {name} one of its own: latex = "..."'
                faults.append(Fault(place, f"the LaTeX spelling '{latex}' is {whose}", hint, source))
        if faults:
            raise InputError(faults)
        self.inverse: dict[str, str] = {latex: name for name, latex in self.names.items()}
        self.euler = next((e for e in ("e", r"\mathrm{e}") if e not in owners), "")
        self._compounds = frozenset(c for c in owners if " " in c)

    def __getitem__(self, name: str) -> str:
        """The spelling of a letter, the variable or `pi`; KeyError for any other name."""
        return self.names[name]

    def signal(self, name: str) -> str:
        """The spelling of a state, an input or an output."""
        return self._signals[name]

    def power_base(self, name: str) -> str | None:
        """The spelling to which an exponent can be attached, None if it needs brackets first."""
        canonical = self._canonical[name]
        bare = canonical
        while _GROUP.search(bare):
            bare = _GROUP.sub("", bare)
        if "^" in bare or " " in bare:
            return None
        # With primes only the order index, primes, exponent is sound TeX: the normal form has it.
        return canonical if "'" in canonical else self.names[name]

    def is_word(self, name: str) -> bool:
        """Whether the spelling is upright and of several letters, so that it wants space round it."""
        return _UPRIGHT.match(self.names[name]) is not None

    @property
    def has_compounds(self) -> bool:
        r"""Whether some spelling is made of two names, as \Delta m is."""
        return bool(self._compounds)

    def merges(self, first: str, second: str) -> bool:
        r"""Whether two names side by side read as a third: \Delta and m where \Delta m is a name."""
        return f"{self._canonical[first]} {self._canonical[second]}" in self._compounds
