"""Values given on the command line as NAME=VALUE."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from symplant.errors import Fault

if TYPE_CHECKING:
    from symplant.plant.model import Model

__all__ = ["fixed_values", "margin_value", "unknown_parameter"]


def fixed_values(model: Model, texts: tuple[str, ...], faults: list[Fault]) -> dict[str, Fraction]:
    """The values by name; what is wrong with them is added to `faults`."""
    values: dict[str, Fraction] = {}
    for text in texts:
        name, _, value = text.partition("=")
        name = name.strip()
        if name not in model.letters:
            faults.append(unknown_parameter(model, "--set", name))
            continue
        try:
            values[name] = Fraction(value.strip())
        except (ValueError, ZeroDivisionError):
            faults.append(Fault("--set", f"{value!r} is not a number", "write NAME=VALUE, for example k=1.5"))
    return values


def margin_value(option: str, text: str | None, faults: list[Fault]) -> Fraction | None:
    """A number given with an option, None if it was left out; what is wrong is added to `faults`."""
    if text is None:
        return None
    try:
        return Fraction(text.strip())
    except (ValueError, ZeroDivisionError):
        faults.append(Fault(option, f"{text!r} is not a number", "write it as 0.5 or 1/2"))
        return None


def unknown_parameter(model: Model, option: str, name: str) -> Fault:
    """That a name given with an option is not a parameter of the plant."""
    from symplant.reading.suggestions import did_you_mean

    return Fault(option, f"no parameter is called {name!r}", did_you_mean(name, model.letters))
