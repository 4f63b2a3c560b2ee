"""The process in which z3 runs: SMT-LIB text in, one line of JSON out.

It is started by `symplant.algebra.decide_solver` and imports nothing of this package, so that a solver
that will not come back can be ended without harm.
"""

from __future__ import annotations

import json
import sys


def main() -> None:
    """Read {"text", "names", "limit"} from standard input, answer with {"answer", "values"}."""
    import z3

    asked = json.load(sys.stdin)
    solver = z3.SolverFor("QF_NRA")
    # A bound on operations, unlike one on time, gives the same answer on every machine.
    solver.set("rlimit", int(asked["limit"]))
    solver.from_string(asked["text"])
    answer = str(solver.check())
    values: dict[str, str] = {}
    if answer == "sat":
        model = solver.model()
        for name in asked["names"]:
            value = model.eval(z3.Real(name), model_completion=True)
            if not z3.is_rational_value(value):
                value = value.approx(30)
            values[name] = f"{value.numerator_as_long()}/{value.denominator_as_long()}"
    json.dump({"answer": answer, "values": values}, sys.stdout)


if __name__ == "__main__":
    main()
