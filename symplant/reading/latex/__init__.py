"""LaTeX to expression trees: a strict gate in front of latex2sympy2.

Nothing here loads SymPy before the first expression is read.
"""

from symplant.reading.latex.default_spelling import default_spelling
from symplant.reading.latex.gate import read_latex
from symplant.reading.latex.matrices import read_latex_matrix
from symplant.reading.latex.names import canonical_spelling

__all__ = ["canonical_spelling", "default_spelling", "read_latex", "read_latex_matrix"]
