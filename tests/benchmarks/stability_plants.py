"""The plants of the stability corpus: the published cases, the examples, and families of our own."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path
from typing import Any

from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments
from symplant.reading.plant_file import read_plant_file

__all__ = ["corpus"]

ROOT = Path(__file__).resolve().parent.parent.parent


def corpus() -> Iterator[tuple[str, Model]]:
    """Every plant with its name, the short ones first within each family."""
    for folder in ("examples", "tests/cases"):
        for path in sorted((ROOT / folder).glob("*.toml")):
            yield path.stem, read_plant_file(path)
    for n in range(1, 6):
        yield f"damped chain {n}", chain(n)
    for n in (1, 2):
        yield f"damped gyroscopic {n}", gyroscopic(n)
    yield "undamped chain 3", chain(3, damped=False)
    yield "chain damped at one end 2", chain(2, dampers=(0,))
    yield "chain damped at one end 3", chain(3, dampers=(0,))
    yield from own_plants()


def plant(A: Any, positive: str = "", real: str = "", ranges: Any = None, **more: Any) -> Model:
    """A plant of which only the dynamics matter."""
    rows = [[str(entry) for entry in row] for row in A]
    n = len(rows)
    table: dict[str, Any] = {name: {"sign": "positive"} for name in positive.split()}
    table |= {name: {"sign": "real"} for name in real.split()} | (ranges or {})
    return model_from_arguments(
        rows, [["1"]] + [["0"]] * (n - 1), [["1"] + ["0"] * (n - 1)], parameters=table, **more
    )


def chain(n: int, damped: bool = True, dampers: tuple[int, ...] | None = None) -> Model:
    """Masses in a row, the first tied to a wall; a spring in each link, a damper in some."""
    chosen = (tuple(range(n)) if dampers is None else dampers) if damped else ()
    A = [["0"] * (2 * n) for _ in range(2 * n)]
    for i in range(n):
        A[i][n + i] = "1"
        for offset, x, present in ((0, "k", tuple(range(n))), (n, "c", chosen)):
            own = f"-{x}{i + 1}" if i in present else "0"
            ahead = f" - {x}{i + 2}" if i + 1 in present and i < n - 1 else ""
            A[n + i][offset + i] = f"({own}{ahead})/m{i + 1}"
            if i and i in present:
                A[n + i][offset + i - 1] = f"{x}{i + 1}/m{i + 1}"
            if i < n - 1 and i + 1 in present:
                A[n + i][offset + i + 1] = f"{x}{i + 2}/m{i + 1}"
    letters = [f"{x}{i}" for x in "mk" for i in range(1, n + 1)] + [f"c{i + 1}" for i in chosen]
    return plant(A, " ".join(letters))


def gyroscopic(n: int) -> Model:
    """n discs on soft bearings, each with two directions that the spin g couples."""
    size = 4 * n
    A = [["0"] * size for _ in range(size)]
    for i in range(n):
        q, v = 2 * i, 2 * n + 2 * i
        for d in (0, 1):
            A[q + d][v + d] = "1"
            A[v + d][q + d] = f"-k{i + 1}/m{i + 1}"
            A[v + d][v + d] = f"-c{i + 1}/m{i + 1}"
            A[v + d][v + 1 - d] = f"{'-' if d else ''}g/m{i + 1}"
            if n > 1:
                other = 2 * (1 - i)
                A[v + d][q + d] = f"-(k{i + 1} + h)/m{i + 1}"
                A[v + d][other + d] = f"h/m{i + 1}"
    letters = " ".join(f"{x}{i + 1}" for x in "mkc" for i in range(n)) + (" h" if n > 1 else "")
    return plant(A, letters, "g")


def own_plants() -> Iterator[tuple[str, Model]]:
    """Converters, control loops with symbolic gains, sampled loops."""
    unit = {"range": [0.1, 0.9]}
    yield "buck converter", plant([["-r/L", "-1/L"], ["1/C", "-1/(R*C)"]], "r L C R")
    yield (
        "boost converter, averaged",
        plant([["-r/L", "-(1-d)/L"], ["(1-d)/C", "-1/(R*C)"]], "r L C R", "", {"d": unit}),
    )
    yield (
        "converter with constant power load",
        plant([["-r/L", "-1/L"], ["1/C", "P/(C*V**2)"]], "r L C P V"),
    )
    yield (
        "converter with input filter",
        plant(
            [["-rf/Lf", "-1/Lf", "0"], ["1/Cf", "0", "-d/Cf"], ["0", "d/L", "-R/L"]],
            "rf Lf Cf L R",
            "",
            {"d": unit},
        ),
    )
    yield "current loop, PI", plant([["-(R + Kp)/L", "Ki/L"], ["-1", "0"]], "R L", "Kp Ki")
    yield (
        "drive, PI speed loop",
        plant([["-R/L", "-Km/L", "0"], ["Km/J", "-b/J", "0"], ["0", "-1", "0"]], "R L Km J b"),
    )
    yield (
        "drive, PI speed loop closed",
        plant(
            [["-R/L", "-(Km + Kp)/L", "Ki/L"], ["Km/J", "-b/J", "0"], ["0", "-1", "0"]], "R L Km J b Kp Ki"
        ),
    )
    yield (
        "drive, position loop",
        plant([["0", "1", "0"], ["0", "-b/J", "Km/J"], ["-K/L", "-Km/L", "-R/L"]], "R L Km J b K"),
    )
    yield (
        "servo with lag, PD",
        plant([["0", "1", "0"], ["0", "-b/J", "1/J"], ["-Kp/T", "-Kd/T", "-1/T"]], "J b T", "Kp Kd"),
    )
    yield (
        "third order, PI",
        plant(
            [["0", "1", "0", "0"], ["0", "0", "1", "0"], ["-1-Kp", "-3", "-3", "Ki"], ["-1", "0", "0", "0"]],
            "",
            "Kp Ki",
        ),
    )
    yield (
        "dead time by Pade, P",
        plant([["-1/T", "K/T"], ["-4/h", "-2/h - 0"]], "T h", "K"),
    )
    yield (
        "two tanks, PI",
        plant([["-1/T1", "0", "Ki/T1"], ["1/T2", "-1/T2", "0"], ["0", "-1", "0"]], "T1 T2 Ki"),
    )
    yield (
        "level loop with actuator",
        plant([["0", "1/A0", "0"], ["-Kp/T", "-1/T", "Ki/T"], ["-1", "0", "0"]], "A0 T Kp Ki"),
    )
    yield (
        "inverted pendulum, state feedback",
        plant([["0", "1"], ["g/l - f1", "-f2"]], "g l", "f1 f2"),
    )
    yield (
        "pendulum on a cart, damped",
        plant(
            [
                ["0", "0", "1", "0"],
                ["0", "0", "0", "1"],
                ["-k/M", "m*g/M", "-c/M", "0"],
                ["k/(M*l)", "-(M+m)*g/(M*l)", "c/(M*l)", "-b"],
            ],
            "M m g l k c b",
        ),
    )
    yield (
        "magnetic bearing, PD with lag",
        plant([["0", "1", "0"], ["ks/m", "0", "ki/m"], ["-P/T", "-D/T", "-1/T"]], "ks m ki P D T"),
    )
    yield (
        "synchronous machine, two axes",
        plant([["0", "1"], ["-Ps*cos(delta)/M", "-D/M"]], "Ps M D", "", {"delta": {"range": [0, 1.5]}}),
    )
    yield (
        "sampled integrator, P",
        plant([["1 - h*K"]], "h", "K", time="discrete"),
    )
    yield (
        "sampled lag, P",
        plant([["exp(-h/T) - K*(1-exp(-h/T))"]], "h T", "K", time="discrete"),
    )
    yield (
        "sampled lag, PI",
        plant(
            [["a - (1-a)*Kp", "(1-a)"], ["-Ki", "1"]],
            "",
            "Kp Ki",
            {"a": {"range": [0.1, 0.95]}},
            time="discrete",
        ),
    )
    yield (
        "sampled double integrator, PD",
        plant([["1 - h**2*P/2", "h - h**2*D/2"], ["-h*P", "1 - h*D"]], "h", "P D", time="discrete"),
    )
    yield "second order recursion", plant([["0", "1"], ["-b", "-a"]], "", "a b", time="discrete")
    yield (
        "recursion with one period of delay",
        plant([["1", "0", "-K*h"], ["1", "0", "0"], ["0", "1", "0"]], "h", "K", time="discrete"),
    )
