"""Zeros along one parameter: events, sensitivities, limits."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import dataclass

from symplant.algebra.decide_search import letters_in
from symplant.algebra.expression import Node
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element
from symplant.algebra.substitution import substituted
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.event_values import NominalValues, nominal_values, solved_for
from symplant.derivation.zeros.events import EventEquation, EventKind, event_equations
from symplant.derivation.zeros.limits import RootLimit, root_limits
from symplant.derivation.zeros.sensitivities import (
    NominalSensitivity,
    Sensitivity,
    nominal_sensitivities,
    sensitivities,
)
from symplant.derivation.zeros.structure import surroundings
from symplant.derivation.zeros.target import target

__all__ = ["Along", "Event", "SensitivityFinding", "along"]


@dataclass(frozen=True)
class Event:
    """Where `equation` is zero the event happens.

    `values`: the equation solved for the parameter where it is linear or quadratic in it (tree, and
    ratio where there is no root sign).  `nominal`: all solutions with the other letters at nominal.
    `frequency_squared`: of a crossing pair, valid where the equation holds.  `at_nominal`: the equation
    in letters would have been too large, so the other letters have their nominal values in it.
    """

    event: EventKind
    equation: Element
    values: tuple[tuple[Node, Ratio | None], ...]
    nominal: NominalValues
    frequency_squared: Ratio | None
    at_nominal: bool = False


@dataclass(frozen=True)
class SensitivityFinding:
    """The formula for one factor, and its values at the nominal point (or why there are none)."""

    formula: Sensitivity
    nominal: tuple[NominalSensitivity, ...]
    note: str


@dataclass(frozen=True)
class Along:
    """What happens to the zeros along one parameter."""

    parameter: str
    zeros: Polynomial
    events: tuple[Event, ...]
    sensitivities: tuple[SensitivityFinding, ...]
    limits: tuple[RootLimit, ...]
    notes: tuple[str, ...]


def along(
    derivation: Derivation,
    parameter: str,
    output: str | None = None,
    input: str | None = None,
    stage: Callable[[str], None] = lambda name: None,
) -> Along:
    """Events, sensitivities and limits of the zeros of the plant or of one channel.

    Errors: KeyError for a name that is no parameter, output or input.

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.plant_file import read_plant_text
    >>> text = '''
    ... format = 1
    ... [parameters]
    ... a = { sign = "positive", nominal = 3 }
    ... b = { sign = "positive", nominal = 2 }
    ... [matrices]
    ... A = [["-a", "1"], ["0", "-b"]]
    ... B = [["1"], ["1"]]
    ... C = [["1", "0"]]
    ... '''
    >>> derivation = derive(read_plant_text(text))
    >>> found = along(derivation, "b")
    >>> [(event.event, str(event.equation)) for event in found.events]
    [('cancels a pole', 'a - b - 1')]
    >>> found.events[0].nominal.values[0].lower
    Fraction(2, 1)
    """
    model = derivation.model
    if parameter not in model.letters:
        raise KeyError(f"{parameter!r} is none of {', '.join(model.letters)}")
    around = surroundings(derivation)
    zeros = target(derivation, output, input)
    notes: list[str] = []
    if zeros.is_zero:
        return Along(parameter, zeros, (), (), (), ("the transfer function is identically zero",))
    poles = derivation.characteristic_polynomial.polynomial
    stage("events")
    found = event_equations(zeros, poles, parameter, around, model.discrete)
    notes += found.notes
    events = [_event(derivation, parameter, equation) for equation in found.equations]
    if found.too_large:
        more, said = _at_nominal(derivation, parameter, zeros, found.too_large)
        events += more
        notes += said
    stage("sensitivities")
    formulas = sensitivities(zeros, parameter, around, derivation.pencil.setting.converter().convert)
    numbers = [nominal_sensitivities(formula, around.nominal) for formula in formulas]
    stage("limits")
    limits, note = root_limits(zeros, parameter, around)
    notes += [note] if note else []
    return Along(
        parameter,
        zeros,
        tuple(events),
        tuple(SensitivityFinding(f, at, why) for f, (at, why) in zip(formulas, numbers, strict=True)),
        limits,
        tuple(notes),
    )


def _event(derivation: Derivation, parameter: str, found: EventEquation, at_nominal: bool = False) -> Event:
    model, ring = derivation.model, derivation.ring
    interval = next(p.interval for p in model.parameters if p.name == parameter)
    return Event(
        found.event,
        found.equation,
        solved_for(ring, found.equation, parameter),
        nominal_values(ring, found.equation, parameter, model.nominal, interval, found.frequency_squared),
        found.frequency_squared,
        at_nominal,
    )


def _at_nominal(
    derivation: Derivation, parameter: str, zeros: Polynomial, kinds: Collection[EventKind]
) -> tuple[list[Event], list[str]]:
    """Events of these kinds with all letters but one at their nominal values."""
    ring, model, around = derivation.ring, derivation.model, surroundings(derivation)
    poles = derivation.characteristic_polynomial.polynomial
    elements = [zeros.element, poles.element]
    others = [name for name in letters_in(ring, elements) if name != parameter]
    named = ", ".join(sorted(kinds))
    missing = [name for name in others if name not in model.nominal]
    if missing or not ring.used(elements) <= {*ring.letters, ring.variable}:
        why = f"no nominal value for {', '.join(missing)}" if missing else "functions of letters occur"
        return [], [f"not worked out ({named}): the equation in letters would be too large, and {why}"]
    values = {name: model.nominal[name] for name in others}
    first, second = (Polynomial.of(ring, substituted(ring, [e], values)[0]) for e in elements)
    if first.is_zero or second.is_zero:
        return [], [f"not worked out ({named}): the polynomials vanish at the nominal point"]
    found = event_equations(first, second, parameter, around, model.discrete)
    events = [_event(derivation, parameter, e, True) for e in found.equations if e.event in kinds]
    return events, [
        f"with the other letters at nominal ({named}): the equation in letters would be too large"
    ]
