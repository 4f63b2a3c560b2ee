"""LaTeX spellings: each must be one name, and no two letters may share one."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from symplant.errors import InputError
from symplant.plant.parameter import Parameter, Signal
from symplant.reading.fault_list import FaultList
from symplant.reading.suggestions import quoted
from symplant.reading.tables import key_place

__all__ = ["check_spellings"]


def check_spellings(
    parameters: Sequence[Parameter],
    signals: Mapping[str, Sequence[Signal]],
    faults: FaultList,
    *,
    latex_was_read: bool,
) -> None:
    r"""Notes spellings that are no names, and letters that their spellings do not tell apart.

    Default spellings (of k1 and k_1, say) may meet as long as no LaTeX is read by them.

    >>> faults = FaultList()
    >>> letters = [Parameter("k", r"k_{\mathrm r}"), Parameter("c", r"k_\text{r}")]
    >>> check_spellings(letters, {}, faults, latex_was_read=False)
    >>> print(faults.found[0])
    parameters.c.latex: 'k_\text{r}' is also the spelling of 'k' (a spelling stands for one letter)
    """
    declared = any(parameter.latex for parameter in parameters)
    if declared or latex_was_read:
        _check_letters(parameters, faults, latex_was_read)
    for key, group in signals.items():
        for number, signal in enumerate(group, start=1):
            if signal.latex:
                _canonical(signal.latex, f"{key}[{number}].latex", faults)


def _check_letters(parameters: Sequence[Parameter], faults: FaultList, latex_was_read: bool) -> None:
    from symplant.reading.latex import default_spelling

    spelled: dict[str, Parameter] = {}
    # Defaults first, so that the declared spelling of two that meet is the one at fault.
    for parameter in sorted(parameters, key=lambda one: bool(one.latex)):
        place = key_place("parameters", parameter.name)
        if parameter.latex:
            spelling = _canonical(parameter.latex, f"{place}.latex", faults)
        else:
            spelling = _canonical(default_spelling(parameter.name), place, FaultList())
        other = spelled.setdefault(spelling, parameter) if spelling else parameter
        if other is parameter:
            continue
        if parameter.latex:
            reason = f"{quoted(parameter.latex)} is also the spelling of {quoted(other.name)}"
            faults.add(f"{place}.latex", reason, "a spelling stands for one letter")
        elif latex_was_read:
            reason = f"{quoted(parameter.name)} and {quoted(other.name)} are both spelled {spelling}"
            faults.add(place, reason, "give one of them a spelling: latex = '...'")


def _canonical(spelling: str, place: str, faults: FaultList) -> str:
    from symplant.reading.latex import canonical_spelling

    try:
        return canonical_spelling(spelling)
    except InputError as error:
        faults.take(error, place)
        return ""
