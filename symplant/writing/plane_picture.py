"""The stable region in the plane of two letters as a picture: SVG, PDF or PNG by the ending of the name.

The curves are drawn from floating-point values of the exact polynomials; the picture shows, it proves
nothing.  The same question gives the same bytes.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from fractions import Fraction
from io import BytesIO
from typing import TYPE_CHECKING, Any, TypeAlias

from symplant.errors import Fault, InputError
from symplant.writing.crossing_words import crossing_words

if TYPE_CHECKING:
    from symplant.algebra.ring import Element
    from symplant.derivation.stability.plane import StabilityPlane
    from symplant.plant.model import Model

__all__ = ["SUFFIXES", "plane_picture", "require_pictures"]

SUFFIXES = ("svg", "pdf", "png")
#: Points of the grid along each axis.
GRID = 401
SHADE = "#cfe3d4"
#: Lines differ in dashes as well as in colour, for those who print in black.
STYLES = {
    "origin": ("#b3261e", "-"),
    "imaginary pair": ("#1f4e9c", "--"),
    "infinity": ("#6b6b6b", ":"),
    "z = 1": ("#b3261e", "-"),
    "z = -1": ("#8a5a00", "-."),
    "complex pair": ("#1f4e9c", "--"),
}

Grid: TypeAlias = Any  # a numpy array of floats


def require_pictures(suffix: str) -> None:
    """Check before any work that a picture can be made; InputError if not."""
    from importlib.util import find_spec

    faults = []
    if suffix not in SUFFIXES:
        endings = ", ".join(f".{s}" for s in SUFFIXES)
        faults.append(Fault("--picture", f"'.{suffix}' is no kind of picture", f"end the name in {endings}"))
    if find_spec("matplotlib") is None:
        faults.append(
            Fault("--picture", "matplotlib is not installed", "install symplant[pictures], or leave it out")
        )
    if faults:
        raise InputError(faults)


def plane_picture(plane: StabilityPlane, model: Model, suffix: str) -> bytes:
    """The picture as the content of a file.

    Errors: InputError as `require_pictures`.
    """
    require_pictures(suffix)
    import matplotlib as mpl
    import numpy as np
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    settings: Any = {
        "svg.hashsalt": "symplant",
        "svg.fonttype": "path",
        "pdf.fonttype": 42,
        "font.size": 9,
        "axes.linewidth": 0.7,
        "mathtext.fontset": "cm",
    }
    with mpl.rc_context(settings):
        figure = Figure(figsize=(5.6, 4.2), layout="constrained")
        FigureCanvasAgg(figure)
        axes = figure.add_subplot()
        (x_low, x_high), (y_low, y_high) = (_limits(plane, model, n) for n in (plane.across, plane.up))
        x, y = np.meshgrid(np.linspace(x_low, x_high, GRID), np.linspace(y_low, y_high, GRID))
        _shade(axes, plane, model, x, y)
        for crossing in plane.curves:
            _curve(axes, plane, crossing, x, y)
        _marks(axes, plane, model)
        axes.set_xlim(x_low, x_high)
        axes.set_ylim(y_low, y_high)
        axes.set_xlabel(_label(model, plane.across))
        axes.set_ylabel(_label(model, plane.up))
        axes.set_title(model.title, fontsize=9)
        figure.legend(loc="outside lower center", frameon=False, fontsize=8, ncols=1)
        if plane.fixed:
            values = ", ".join(f"{_symbol(model, n)} = {float(v):.4g}" for n, v in plane.fixed.items())
            axes.annotate(values, (0, -0.2), xycoords="axes fraction", fontsize=7, wrap=True)
        out = BytesIO()
        metadata: Mapping[str, None] = {"svg": {"Date": None}, "pdf": {"CreationDate": None}}.get(suffix, {})
        figure.savefig(out, format=suffix, dpi=200, metadata=metadata)
    return out.getvalue()


def _shade(axes: Any, plane: StabilityPlane, model: Model, x: Grid, y: Grid) -> None:
    import numpy as np

    least = np.full_like(x, np.inf)
    for element in plane.conditions:
        values = _values(plane, element, x, y)
        least = np.minimum(least, values / max(float(np.nanmax(np.abs(values))), 1e-300))
    if not plane.conditions:
        least = np.ones_like(x)
    inside = np.minimum(_inside(model, plane.across, x), _inside(model, plane.up, y))
    least = np.where(inside, least, np.nan)
    if np.nanmax(least) > 0:
        axes.contourf(x, y, least, levels=[0, np.inf], colors=[SHADE])
        axes.fill([], [], color=SHADE, label="asymptotically stable")


def _curve(axes: Any, plane: StabilityPlane, crossing: Any, x: Grid, y: Grid) -> None:
    import numpy as np

    values = _values(plane, crossing.element, x, y)
    if not (np.nanmin(values) < 0 < np.nanmax(values)):
        return
    colour, dashes = STYLES[crossing.detail or crossing.at]
    axes.contour(x, y, values, levels=[0], colors=[colour], linestyles=[dashes], linewidths=1.4)
    axes.plot([], [], color=colour, linestyle=dashes, linewidth=1.4, label=crossing_words(crossing))


def _marks(axes: Any, plane: StabilityPlane, model: Model) -> None:
    """The nominal point, and the ranges as a frame."""
    across, up = (next(p for p in model.parameters if p.name == n) for n in (plane.across, plane.up))
    style = {"color": "#444444", "linewidth": 0.7, "linestyle": (0, (4, 3)), "zorder": 1}
    for value in (across.lower, across.upper):
        if value is not None:
            axes.axvline(float(value), **style)
    for value in (up.lower, up.upper):
        if value is not None:
            axes.axhline(float(value), **style)
    if any(v is not None for p in (across, up) for v in (p.lower, p.upper)):
        axes.plot([], [], label="limits of the ranges", **style)
    if across.nominal is not None and up.nominal is not None:
        axes.plot(
            [float(across.nominal)], [float(up.nominal)], "o", color="black", ms=4.5, label="nominal values"
        )


def _values(plane: StabilityPlane, element: Element, x: Grid, y: Grid) -> Grid:
    """Floating-point values of an element on the grid."""
    import numpy as np

    from symplant.algebra.enclosure import generator_balls, working_precision

    ring = plane.ring
    bases: dict[str, Any] = {plane.across: x, plane.up: y}
    constants = ring.used([element]) - set(bases)
    letters = {plane.across, plane.up}
    with working_precision(64):
        for key in constants:
            bases[key] = _function_values(plane, key, x, y, letters, generator_balls)
    total = np.zeros_like(x)
    for exponents, value in element.to_dict().items():
        term = np.full_like(x, float(int(value)))
        for place, exponent in enumerate(exponents):
            if exponent:
                term = term * bases[ring.keys[place]] ** int(exponent)
        total = total + term
    return total


def _function_values(plane: StabilityPlane, key: str, x: Grid, y: Grid, letters: set[str], balls: Any) -> Any:
    """A function of numbers is one number; one of the two letters is worked out point by point."""
    import numpy as np

    from symplant.algebra.decide_search import letters_in

    ring = plane.ring
    if not letters & set(letters_in(ring, [ring.gen(key)])):
        return float(balls(ring, {}, {key})[key].mid())
    result = np.full_like(x, np.nan)
    for index in np.ndindex(*x.shape):
        point = {plane.across: Fraction(float(x[index])), plane.up: Fraction(float(y[index]))}
        try:
            ball = balls(ring, point, {key})[key]
        except (ValueError, ZeroDivisionError):
            continue
        result[index] = float(ball.mid()) if ball.is_finite() else np.nan
    return result


def _inside(model: Model, name: str, values: Grid) -> Grid:
    interval = next(p for p in model.parameters if p.name == name).interval
    keep = values == values
    if interval.lower is not None:
        keep = keep & (values >= float(interval.lower))
    if interval.upper is not None:
        keep = keep & (values <= float(interval.upper))
    if interval.sign.is_nonnegative:
        keep = keep & (values >= 0)
    if interval.sign.is_nonpositive:
        keep = keep & (values <= 0)
    return keep


def _limits(plane: StabilityPlane, model: Model, name: str) -> tuple[float, float]:
    """The range with a margin; without one, what shows the nominal value and every cell."""
    parameter = next(p for p in model.parameters if p.name == name)
    shown = [float(cell.point[name]) for cell in plane.cells]
    shown += [float(v) for v in (parameter.lower, parameter.upper, parameter.nominal) if v is not None]
    if parameter.lower is not None and parameter.upper is not None:
        low, high = float(parameter.lower), float(parameter.upper)
    else:
        low, high = min(shown, default=-1.0), max(shown, default=1.0)
        if parameter.nominal is not None:
            low, high = min(low, 0.0), max(high, 2 * float(parameter.nominal))
        sign = parameter.interval.sign
        low = 0.0 if sign.is_nonnegative else low
        high = 0.0 if sign.is_nonpositive else high
        wider = ((high - low) or 1.0) / 2
        low, high = (
            (low if sign.is_nonnegative else low - wider),
            (high if sign.is_nonpositive else high + wider),
        )
    width = (high - low) or 1.0
    return low - 0.06 * width, high + 0.06 * width


def _symbol(model: Model, name: str) -> str:
    from matplotlib.mathtext import MathTextParser

    from symplant.reading.latex import default_spelling

    parameter = next(p for p in model.parameters if p.name == name)
    latex = parameter.latex or default_spelling(name)
    # Matplotlib reads a part of LaTeX only, and wants braces around arguments.
    text = re.sub(r"\\(mathrm|mathbf|mathit)\s+(\w)", r"\\\1{\2}", f"${latex}$")
    try:
        MathTextParser("agg").parse(text)
    except ValueError:
        return name
    return text


def _label(model: Model, name: str) -> str:
    parameter = next(p for p in model.parameters if p.name == name)
    symbol = _symbol(model, name)
    return f"{symbol} in {parameter.unit}" if parameter.unit else symbol
