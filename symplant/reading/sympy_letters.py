"""The letters that SymPy symbols stand for: their names, spellings and signs."""

from __future__ import annotations

from collections.abc import Iterable, MutableMapping
from typing import TYPE_CHECKING, Any

from symplant.algebra.box import Sign
from symplant.errors import InputError
from symplant.reading.fault_list import FaultList
from symplant.reading.identifiers import identifier_from
from symplant.reading.parameters import SIGN_WORDS
from symplant.reading.suggestions import quoted
from symplant.reading.tables import key_place
from symplant.reading.tokens import is_identifier, normal_form

if TYPE_CHECKING:
    import sympy

__all__ = ["SymbolTable"]

# The signs that a value may have under each word.
_POSSIBLE = {
    Sign.POSITIVE: frozenset((1,)),
    Sign.NONNEGATIVE: frozenset((0, 1)),
    Sign.NEGATIVE: frozenset((-1,)),
    Sign.NONPOSITIVE: frozenset((-1, 0)),
    Sign.NONZERO: frozenset((-1, 1)),
    Sign.ZERO: frozenset((0,)),
    Sign.REAL: frozenset((-1, 0, 1)),
}
_WORDS = {possible: sign for sign, possible in _POSSIBLE.items()}


class SymbolTable:
    r"""One table of letters for text and symbols alike; `tables` is the table of parameters in the making.

    Symbols of one name are one letter, whatever each of them is assumed to be: all the assumptions
    hold together.  `closed` means that no letters are added.

    >>> import sympy
    >>> table = SymbolTable({}, FaultList())
    >>> table.enter([sympy.Symbol("k", positive=True), sympy.Symbol(r"K_{\mathrm{t}}")])
    >>> table.tables
    {'k': {'sign': 'positive'}, 'K_t': {'latex': 'K_{\\mathrm{t}}'}}
    """

    def __init__(
        self, tables: MutableMapping[str, dict[str, object]], faults: FaultList, *, closed: bool = False
    ) -> None:
        self.tables = tables
        self.names: dict[sympy.Symbol, str] = {}
        self._faults = faults
        self._closed = closed

    def enter(self, symbols: Iterable[sympy.Symbol]) -> None:
        """Finds or makes the letter of each symbol."""
        for symbol in symbols:
            if symbol not in self.names:
                name = self._known(symbol)
                if name is None and not self._closed:
                    name = self.declare(symbol, {})
                if name is not None:
                    self._assume(symbol, name)

    def declare(self, symbol: sympy.Symbol, table: dict[str, object]) -> str:
        """Adds a letter for a symbol with what else is declared of it; the letter's name."""
        spelling = symbol.name
        if is_identifier(spelling):
            name = normal_form(spelling)
        else:
            name = _unused(identifier_from(spelling), self.tables)
            table.setdefault("latex", spelling)
        self.tables[name] = table
        self._assume(symbol, name)
        return name

    def enter_letters(self, letters: Iterable[str]) -> None:
        """Adds letters that text has, unless no letters are added."""
        for letter in letters:
            if not self._closed:
                self.tables.setdefault(letter, {})

    def _known(self, symbol: sympy.Symbol) -> str | None:
        name = normal_form(symbol.name)
        if name in self.tables:
            return name
        for known, table in self.tables.items():
            spelling = table.get("latex")
            if isinstance(spelling, str) and spelling and _canonical(spelling) == _canonical(symbol.name):
                return known
        return None

    def _assume(self, symbol: sympy.Symbol, name: str) -> None:
        """Joins what SymPy assumes of a symbol with what is declared of its letter."""
        place = key_place("parameters", name)
        if _is_dummy(symbol) and name in self.names.values():
            self._faults.add(place, f"two different symbols are called {quoted(name)}", "rename one of them")
        self.names[symbol] = name
        table = self.tables[name]
        declared = table.get("sign", Sign.REAL.value)
        if not isinstance(declared, str) or declared not in SIGN_WORDS:
            return  # to be reported with the other parameters
        possible = _possible(symbol)
        together = possible & _POSSIBLE[Sign(declared)]
        if not possible:
            self._faults.add(place, f"the symbol {quoted(name)} is assumed to be no real number")
        elif not together:
            assumed = _WORDS[possible].value
            self._faults.add(place, f"{quoted(name)} is declared {declared}, but a symbol assumed {assumed}")
        elif _WORDS[together] is Sign.ZERO:
            self._faults.add(
                place, f"the symbol {quoted(name)} is assumed to be zero", "write 0 in its place"
            )
        elif "sign" in table or _WORDS[together] is not Sign.REAL:
            table["sign"] = _WORDS[together].value


def _possible(symbol: Any) -> frozenset[int]:
    """The signs that the assumptions of a symbol leave, without any if it cannot be real."""
    signs = {-1: symbol.is_negative, 0: symbol.is_zero, 1: symbol.is_positive}
    return frozenset(sign for sign, answer in signs.items() if answer is not False)


def _is_dummy(symbol: sympy.Symbol) -> bool:
    import sympy

    return isinstance(symbol, sympy.Dummy | sympy.Wild)


def _canonical(spelling: str) -> str:
    from symplant.reading.latex import canonical_spelling

    try:
        return canonical_spelling(spelling)
    except InputError:
        return spelling


def _unused(name: str, taken: MutableMapping[str, dict[str, object]]) -> str:
    number, candidate = 1, name
    while candidate in taken:
        number += 1
        candidate = f"{name}_{number}"
    return candidate
