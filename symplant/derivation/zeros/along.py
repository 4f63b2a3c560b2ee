"""Zeros along one parameter: events, sensitivities, limits."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from symplant.algebra.expression import Node
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.event_values import NominalValues, nominal_values, solved_for
from symplant.derivation.zeros.events import EventKind, event_equations
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
    `frequency_squared`: of a crossing pair, valid where the equation holds.
    """

    event: EventKind
    equation: Element
    values: tuple[tuple[Node, Ratio | None], ...]
    nominal: NominalValues
    frequency_squared: Ratio | None


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
    """
    model = derivation.model
    if parameter not in model.letters:
        raise KeyError(f"{parameter!r} is none of {', '.join(model.letters)}")
    ring, around = derivation.ring, surroundings(derivation)
    zeros = target(derivation, output, input)
    notes: list[str] = []
    if zeros.is_zero:
        return Along(parameter, zeros, (), (), (), ("the transfer function is identically zero",))
    poles = derivation.characteristic_polynomial.polynomial
    stage("events")
    equations, said = event_equations(zeros, poles, parameter, around, model.discrete)
    notes += said
    interval = next(p.interval for p in model.parameters if p.name == parameter)
    events = tuple(
        Event(
            found.event,
            found.equation,
            solved_for(ring, found.equation, parameter),
            nominal_values(
                ring, found.equation, parameter, around.nominal, interval, found.frequency_squared
            ),
            found.frequency_squared,
        )
        for found in equations
    )
    stage("sensitivities")
    formulas = sensitivities(zeros, parameter, around, derivation.pencil.setting.converter().convert)
    numbers = [nominal_sensitivities(formula, around.nominal) for formula in formulas]
    stage("limits")
    limits, note = root_limits(zeros, parameter, around)
    notes += [note] if note else []
    return Along(
        parameter,
        zeros,
        events,
        tuple(SensitivityFinding(f, found, why) for f, (found, why) in zip(formulas, numbers, strict=True)),
        limits,
        tuple(notes),
    )
