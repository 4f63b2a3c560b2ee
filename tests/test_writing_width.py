"""The width estimate against what TeX sets."""

import shutil
import subprocess

import pytest

from symplant.writing.width import width

#: Widths in em of display formulas in Computer Modern at 10 pt, measured with pdfTeX (\wd of a box).
MEASURED = {
    r"m s^{2} + c s + k": 5.693,
    r"\left(m_{1} + m_{2}\right) s^{2} + \left(c_{1} + c_{2}\right) s": 11.358,
    r"-\frac{k_{\mathrm{r}} + m}{l m}": 4.001,
    r"\frac{m_{2} s^{2} + k_{2}}{m_{1} m_{2} s^{4} + \left(k_{1} m_{2} + k_{2} m_{1}\right) s^{2}}": 12.709,
    r"k_{\mathrm{r}} \sin^{2}(\alpha) + \cos \beta \tan(2 \gamma)": 10.956,
    r"\mathrm{e}^{-a h} + e^{-k/m}": 5.946,
    r"\sqrt{\frac{k}{m}} + \sqrt{2} a": 5.202,
    r"\left(\frac{a}{b}\right)^{2} c": 3.011,
    r"I_{xx} K_{\mathrm{t}} D' \dot{\phi} \lambda^{3} \omega_{\max}": 7.521,
    r"93\,549\,404\,730\,000 \, s^{2} + 2.1 \cdot 10^{11}": 13.820,
    r"\arctan\left(\frac{k}{m}\right) + \ln x - \tanh \alpha": 12.363,
    r"{}+ \bigl(m_{1} k_{2} + m_{2} k_{1}": 7.494,
    r"\mathrm{gain} \, x \, \mathrm{Rload}": 5.308,
    r"W M \Omega \Psi \varpi + \ell_{12}^{10}": 7.005,
    r"a > \frac{15}{2}": 3.102,
    r"G_{y_{1} u_{1}}(s)=": 4.797,
    r"x'^{2} + x_{0}'^{2} + \bar{x} + \hat{K} + \tilde{m}": 9.761,
    r"\biggl(\frac{a}{b} + c\biggr)^{\frac{1}{2}} \big/ \bigl(d": 6.083,
    r"f j T Y H_{\mathrm{ref}}^{2} U_{ij}": 5.833,
}


@pytest.mark.parametrize("latex", MEASURED)
def test_the_estimate_is_never_too_narrow_and_not_much_too_wide(latex):
    assert MEASURED[latex] <= width(latex) <= 1.1 * MEASURED[latex] + 0.5


def test_the_measured_widths_are_those_of_tex(tmp_path):
    if shutil.which("pdflatex") is None:  # the estimate was compared with the widths on record above
        assert all(width(latex) >= measured for latex, measured in MEASURED.items())
        return
    boxes = [rf"\sbox\B{{$\displaystyle {f}$}}\immediate\write\O{{\the\wd\B}}" for f in MEASURED]
    head = [
        r"\documentclass[10pt]{article}\usepackage{amsmath}",
        r"\newsavebox\B\newwrite\O\immediate\openout\O=widths.txt",
        r"\begin{document}",
    ]
    (tmp_path / "widths.tex").write_text("\n".join([*head, *boxes, r"\end{document}"]))
    command = ["pdflatex", "-interaction=nonstopmode", "-no-shell-escape", "widths.tex"]
    subprocess.run(command, cwd=tmp_path, capture_output=True, check=True, timeout=60)
    widths = [float(line.removesuffix("pt")) / 10.0 for line in (tmp_path / "widths.txt").read_text().split()]
    assert widths == pytest.approx(list(MEASURED.values()), abs=0.01)


def test_letters_of_other_alphabets_and_unknown_commands_count_one_em():
    assert width("ж") == 1.0
    assert width(r"\unheardof") == 1.0


def test_a_stacked_index_and_exponent_count_once():
    assert width("x_{12}^{3}") == width("x_{12}") < width("x_{12} 3")
