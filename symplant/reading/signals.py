"""States, inputs and outputs: their names, declared or given by number."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from symplant.plant.parameter import Parameter, Signal
from symplant.reading.fault_list import FaultList
from symplant.reading.identifiers import name_trouble
from symplant.reading.suggestions import quoted
from symplant.reading.tables import check_keys, kind_of, text_field
from symplant.reading.tokens import normal_form

__all__ = ["SIGNAL_KEYS", "check_signal_names", "numbered", "read_signals"]

SIGNAL_KEYS = ("name", "latex", "unit", "about")
_NUMBERED = {"states": "x", "inputs": "u", "outputs": "y"}


def read_signals(raw: object, key: str, faults: FaultList) -> tuple[Signal, ...] | None:
    """The signals of a list, `key` being states, inputs or outputs; None if it is no list.

    Each is a name or a table; one with a fault still counts, so that no matrix is blamed for its size.

    >>> faults = FaultList()
    >>> read_signals(["F", {"name": "d", "unit": "N"}], "inputs", faults)[1].unit
    'N'
    """
    if not isinstance(raw, list | tuple):
        hint = f'write {key} = ["{raw}"]' if isinstance(raw, str) else f"write {key} = [...]"
        faults.add(key, f"{kind_of(raw)} where a list of names is expected", hint)
        return None
    if not raw:
        faults.add(key, "an empty list", f"leave {key} out for {_NUMBERED[key]}1, {_NUMBERED[key]}2, ...")
        return None
    signals: list[Signal] = []
    first_place: dict[str, str] = {}
    for number, item in enumerate(raw, start=1):
        place = f"{key}[{number}]"
        signal = _read_one(item, place, faults)
        earlier = first_place.setdefault(signal.name, place)
        if signal.name and earlier != place:
            faults.add(place, f"{quoted(signal.name)} is named twice", f"it is {earlier} already")
        signals.append(signal)
    return tuple(signals)


def numbered(key: str, count: int) -> tuple[Signal, ...]:
    """Signals without names of their own.

    >>> [signal.name for signal in numbered("states", 2)]
    ['x1', 'x2']
    """
    return tuple(Signal(f"{_NUMBERED[key]}{number}") for number in range(1, count + 1))


def check_signal_names(
    states: Sequence[Signal],
    inputs: Sequence[Signal],
    outputs: Sequence[Signal],
    parameters: Sequence[Parameter],
    faults: FaultList,
) -> None:
    """Notes names that stand for two things.  An output may be called like what it reads."""
    of_state = {signal.name for signal in states if signal.name}
    for number, signal in enumerate(inputs, start=1):
        if signal.name in of_state:
            faults.add(
                f"inputs[{number}]", f"{quoted(signal.name)} is also a state", "name one of them differently"
            )
    kinds = {signal.name: "an output" for signal in outputs}
    kinds |= {signal.name: "an input" for signal in inputs}
    kinds |= {signal.name: "a state" for signal in states}
    for parameter in parameters:
        if kind := kinds.get(parameter.name):
            reason = f"{quoted(parameter.name)} is also {kind}"
            faults.add(f"parameters.{parameter.name}", reason, "name one of them differently")


def _read_one(item: object, place: str, faults: FaultList) -> Signal:
    if isinstance(item, str):
        return Signal(_name(item, place, faults))
    if not isinstance(item, Mapping):
        faults.add(place, f"{kind_of(item)} where a name or a table is expected", 'write { name = "..." }')
        return Signal("")
    check_keys(item, SIGNAL_KEYS, place, faults)
    if "name" in item:
        name = _name(text_field(item, "name", place, faults), f"{place}.name", faults, item["name"])
    else:
        faults.add(place, "no name", 'write { name = "..." }')
        name = ""
    latex = text_field(item, "latex", place, faults)
    return Signal(
        name, latex, text_field(item, "unit", place, faults), text_field(item, "about", place, faults)
    )


def _name(text: str, place: str, faults: FaultList, written: object = "") -> str:
    name = normal_form(text)
    if not isinstance(written, str):  # reported as no text already
        return ""
    if trouble := name_trouble(name):
        faults.add(place, *trouble)
        return ""
    return name
