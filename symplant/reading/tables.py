"""Tables of a plant file: which keys they may have, and fields that hold text."""

from __future__ import annotations

import numbers
import re
from collections.abc import Collection, Mapping
from decimal import Decimal

from symplant.reading.fault_list import FaultList
from symplant.reading.suggestions import did_you_mean, listed, quoted

__all__ = ["check_keys", "key_place", "kind_of", "text_field"]

_BARE_KEY = re.compile(r"[\w-]+")


def key_place(outer: str, key: object) -> str:
    """The place of a key within an outer place.

    >>> key_place("parameters", "k"), key_place("parameters", "k 1"), key_place("", "time")
    ('parameters.k', "parameters.'k 1'", 'time')
    """
    name = str(key)
    shown = name if _BARE_KEY.fullmatch(name) and len(name) <= 40 else quoted(name)
    return f"{outer}.{shown}" if outer else shown


def check_keys(
    table: Mapping[str, object],
    allowed: Collection[str],
    place: str,
    faults: FaultList,
    elsewhere: Mapping[str, str] | None = None,
) -> None:
    """Notes every key that is not allowed; `elsewhere` tells where else a key would be in place."""
    for key in table:
        if key in allowed:
            continue
        hint = (elsewhere or {}).get(key) or did_you_mean(key, allowed)
        faults.add(
            key_place(place, key), f"unknown key {quoted(key)}", hint or f"keys are {listed(allowed, 'and')}"
        )


def text_field(table: Mapping[str, object], key: str, place: str, faults: FaultList) -> str:
    """A field that holds text; empty if left out or at fault."""
    value = table.get(key, "")
    if isinstance(value, str):
        return value
    faults.add(key_place(place, key), f"{kind_of(value)} where text is expected", "write it in quotes")
    return ""


def kind_of(value: object) -> str:
    """What a value is, in the words of a plant file.

    >>> kind_of([1]), kind_of({}), kind_of(True), kind_of(1.5)
    ('a list', 'a table', 'true or false', 'a number')
    """
    if isinstance(value, bool):
        return "true or false"
    if isinstance(value, str):
        return "text"
    if isinstance(value, Mapping):
        return "a table"
    if isinstance(value, list | tuple):
        return "a list"
    if value is None:
        return "nothing"
    if hasattr(value, "isoformat"):
        return "a date or time"
    if isinstance(value, numbers.Number):
        return "a number" if isinstance(value, numbers.Real | Decimal) else "a complex number"
    return f"a value of type {type(value).__name__}"
