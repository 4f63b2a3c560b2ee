"""The parts of a report that state results: polynomials, channels, conditions, assumptions."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.writing.tex_text import tex_text

if TYPE_CHECKING:
    from symplant.algebra.ring import Element
    from symplant.derivation.derive import Channel, Derivation, Scaled
    from symplant.writing.printing import Printer

__all__ = ["assumptions", "channel_sections", "characteristic", "zero_section"]


def characteristic(derivation: Derivation, printer: Printer) -> tuple[str, str]:
    """The display of the characteristic polynomial, and the sentence on its multiplier."""
    scaled = derivation.characteristic_polynomial
    s = derivation.model.variable
    element = scaled.polynomial.element
    body = printer.polynomial("characteristic polynomial", rf"\Delta({s})", element, "eq:characteristic")
    body += "\n" + printer.factored("characteristic polynomial", rf"\Delta({s})", element)
    pencil = rf"\det\left({s}\,\mathbf{{E}} - \mathbf{{A}}\right)"
    if derivation.model.E is None:
        pencil = rf"\det\left({s}\,\mathbf{{I}} - \mathbf{{A}}\right)"
    return body.strip(), _multiplied(printer, rf"\Delta({s})", pencil, scaled)


def channel_sections(derivation: Derivation, printer: Printer) -> list[dict[str, str]]:
    """One subsection for each channel."""
    sections = []
    m = len(derivation.model.inputs)
    for number, channel in enumerate(derivation.channels):
        i, j = divmod(number, m)
        index = "" if len(derivation.channels) == 1 else f"_{{{i + 1}{j + 1}}}"
        sections.append(_channel(derivation, channel, index, printer))
    return sections


def _channel(derivation: Derivation, channel: Channel, index: str, printer: Printer) -> dict[str, str]:
    s, spelling = derivation.model.variable, printer.spelling
    y, u = spelling.signal(channel.output.name), spelling.signal(channel.input.name)
    shared = channel.denominator.element == derivation.characteristic_polynomial.polynomial.element
    below = rf"\Delta({s})" if shared else rf"D{index}({s})"
    above = rf"N{index}({s})"
    about = [signal.about for signal in (channel.output, channel.input) if signal.about]
    parts = []
    if about:
        parts.append(tex_text(" over ".join(about)).capitalize() + ".")
    if channel.numerator.is_zero:
        parts.append("The numerator is identically zero: this input does not reach this output.")
        return {"heading": rf"\boldmath ${y}$ over ${u}$", "body": "\n".join(parts)}
    parts.append(rf"\[ \frac{{{y}({s})}}{{{u}({s})}} = \frac{{{above}}}{{{below}}} \]")
    label = f"eq:numerator-{channel.output.name}-{channel.input.name}".replace("_", "-")
    parts.append(printer.polynomial(f"numerator {channel.name}", above, channel.numerator.element, label))
    parts.append(printer.factored(f"numerator {channel.name}", above, channel.numerator.element))
    if not shared:
        parts.append(printer.polynomial(f"denominator {channel.name}", below, channel.denominator.element))
    parts.append(f"Relative degree {channel.relative_degree}, for generic values of the parameters.")
    factor = channel.common_factor
    if factor.degree > 0:
        text = printer.inline(f"common factor {channel.name}", factor.element)
        parts.append(
            rf"Numerator and denominator share the factor ${text}$. It is not cancelled here: the mode "
            "behind it is in the plant, though this channel does not show it."
        )
    return {
        "heading": rf"\boldmath ${y}$ over ${u}$",
        "body": "\n\n".join(part for part in parts if part),
    }


def zero_section(derivation: Derivation, printer: Printer) -> str:
    """The zero polynomial, or why there is none."""
    zero, s = derivation.zero_polynomial, derivation.model.variable
    if zero is None:
        return f"There is no zero polynomial: {tex_text(derivation.zero_polynomial_note)}."
    if zero.polynomial.is_zero:
        note = tex_text(derivation.zero_polynomial_note)
        return f"The zero polynomial vanishes identically: {note}."
    element = zero.polynomial.element
    pencil = _pencil(derivation, s)
    parts = [
        printer.polynomial("zero polynomial", rf"Z({s})", element, "eq:zero"),
        printer.factored("zero polynomial", rf"Z({s})", element),
        _multiplied(printer, rf"Z({s})", pencil, zero),
    ]
    if zero.polynomial.degree == 0:
        parts.append(
            f"It is free of ${s}$: for generic values of the parameters the plant has no finite zeros."
        )
    return "\n\n".join(part for part in parts if part)


def _pencil(derivation: Derivation, s: str) -> str:
    identity = r"\mathbf{I}" if derivation.model.E is None else r"\mathbf{E}"
    direct = "0" if derivation.model.D is None else r"\mathbf{D}"
    rows = rf"\mathbf{{A}} - {s}\,{identity} & \mathbf{{B}} \\ \mathbf{{C}} & {direct}"
    return rf"\det\begin{{bmatrix}} {rows} \end{{bmatrix}}"


def _multiplied(printer: Printer, name: str, determinant: str, scaled: Scaled) -> str:
    top, bottom = scaled.multiplier
    if top.is_one() and bottom.is_one():
        return rf"Here ${name} = {determinant}$."
    if bottom.is_one() and (-top).is_one():
        return rf"Here ${name} = -{determinant}$."
    factor = printer.quotient("multiplier", top, bottom)
    if bottom.is_one() and len(top) > 1 and not factor.endswith(r"\right)"):
        factor = rf"\left({factor}\right)"
    return rf"Here ${name} = {factor} \cdot {determinant}$."


def assumptions(derivation: Derivation, printer: Printer) -> str:
    """What the entries were divided by, what lies under roots and logarithms, what is undecided."""
    parts = []
    elements: tuple[Element, ...] = derivation.assumed_nonzero
    if elements:
        formulas = [printer.inline("assumed nonzero", element) for element in elements]
        listed = ", ".join(rf"${formula}$" for formula in formulas)
        parts.append(
            f"The entries of the matrices were divided by these, which are taken to be nonzero: {listed}."
        )
    else:
        parts.append("No entry of the matrices is divided by a parameter.")
    converter = derivation.pencil.setting.converter()
    for tree, relation in derivation.pencil.setting.domain:
        sign = r"\ge" if relation == ">=" else relation
        formula = printer.entry("assumed for real values", tree, converter.convert(tree))
        parts.append(rf"For real values ${formula} {sign} 0$ is taken to hold.")
    if derivation.ring.undecidable:
        parts.append(
            f"Equality of expressions is not fully decided here: {tex_text(derivation.ring.undecidable)}."
        )
    parts.append(
        "Degrees and common factors are those for generic values of the parameters; at special values "
        "leading coefficients may vanish and further factors may become common."
    )
    return "\n\n".join(parts)
