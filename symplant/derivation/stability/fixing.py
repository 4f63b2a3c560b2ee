"""A plant with some of its letters given values: the letters are gone from every entry."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk
from symplant.errors import Fault, InputError
from symplant.plant.model import Matrix, Model

__all__ = ["fixed_model", "values_along"]


def fixed_model(model: Model, values: Mapping[str, Fraction]) -> Model:
    """The plant with values in place of letters, also inside functions.

    Errors: InputError for names that are not parameters of the plant.
    """
    faults = [
        Fault("fixed", f"'{name}' is not a parameter of the plant", f"parameters: {', '.join(model.letters)}")
        for name in values
        if name not in model.letters
    ]
    if faults:
        raise InputError(faults)
    if not values:
        return model

    def put(matrix: Matrix) -> Matrix:
        return tuple(tuple(_replaced(entry, values) for entry in row) for row in matrix)

    return replace(
        model,
        A=put(model.A),
        B=put(model.B),
        C=put(model.C),
        D=None if model.D is None else put(model.D),
        E=None if model.E is None else put(model.E),
        parameters=tuple(p for p in model.parameters if p.name not in values),
    )


def values_along(
    letter: str, letters: tuple[str, ...], nominal: Mapping[str, Fraction], fixed: Mapping[str, Fraction]
) -> dict[str, Fraction]:
    """Values for every letter but one: fixed ones first, then nominal ones.

    Errors: InputError naming each letter that has neither, and an unknown `letter`.
    """
    faults = []
    if letter not in letters:
        faults.append(
            Fault("along", f"'{letter}' is not a parameter of the plant", f"one of {', '.join(letters)}")
        )
    if letter in fixed:
        faults.append(Fault("along", f"'{letter}' has a fixed value", "leave one of the two out"))
    for name in letters:
        if name != letter and name not in fixed and name not in nominal:
            reason = f"'{name}' has no nominal value"
            faults.append(Fault(f"parameters.{name}", reason, "give it one, or fix it for this question"))
    if faults:
        raise InputError(faults)
    return {name: fixed.get(name, nominal.get(name, Fraction(0))) for name in letters if name != letter}


def _replaced(tree: Node, values: Mapping[str, Fraction]) -> Node:
    """The tree with numbers for names; parts are rebuilt bottom up, without recursion."""
    stack: list[Node] = []
    for node in walk(tree):
        match node:
            case Name(name=name) if name in values:
                stack.append(Number(values[name], node.column))
            case Sum(terms=parts):
                stack.append(Sum(_take(stack, len(parts)), node.column))
            case Product(factors=parts):
                stack.append(Product(_take(stack, len(parts)), node.column))
            case Quotient():
                top, bottom = _take(stack, 2)
                stack.append(Quotient(top, bottom, node.column))
            case Power(exponent=exponent):
                stack.append(Power(stack.pop(), exponent, node.column))
            case Call(function=function):
                stack.append(Call(function, stack.pop(), node.column))
            case _:
                stack.append(node)
    return stack.pop()


def _take(stack: list[Node], count: int) -> tuple[Node, ...]:
    taken = tuple(stack[-count:])
    del stack[-count:]
    return taken
