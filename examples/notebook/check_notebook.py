"""Checks cooling.ipynb as it is kept and as it was executed:

    jupyter nbconvert --to notebook --execute --output-dir OUT cooling.ipynb
    python3 check_notebook.py OUT/cooling.ipynb

Numbers are computed anew, from the exponentials that the model leads to.
"""

import json
import re
import sys
from decimal import Decimal, getcontext
from pathlib import Path
from xml.etree import ElementTree

KEPT = Path(__file__).with_name("cooling.ipynb")
MATH = "{http://www.w3.org/1998/Math/MathML}"


def require(holds, what):
    if not holds:
        sys.exit(f"check_notebook: {what}")


def check_kept(book, text):
    """The kept notebook has no outputs and no traces of the machine."""
    require(set(book["metadata"]) == {"kernelspec", "language_info"}, "the kept notebook has metadata of a run")
    require(book["metadata"]["language_info"] == {"name": "python"}, "the kept notebook names a version of Python")
    for cell in book["cells"]:
        require(not cell["metadata"], f"cell {cell['id']} has metadata")
        if cell["cell_type"] == "code":
            require(cell["outputs"] == [] and cell["execution_count"] is None, f"cell {cell['id']} keeps outputs")
    require(not re.search(r"/(home|root|tmp|work|Users)/|[A-Z]:\\\\", text), "the kept notebook holds a path")


def outputs_of(book):
    """Returns by the ids of the cells what was shown: by MIME type, or as printed."""
    shown = {}
    for number, cell in enumerate((c for c in book["cells"] if c["cell_type"] == "code"), 1):
        require(cell["execution_count"] == number, f"cell {cell['id']} was not run in its turn")
        for output in cell["outputs"]:
            kind = output["output_type"]
            require(kind != "error", f"cell {cell['id']} raised {output.get('ename')}: {output.get('evalue')}")
            require(output.get("name") != "stderr", f"cell {cell['id']} complained: {output.get('text')}")
            data = {"printed": output["text"]} if kind == "stream" else output["data"]
            for mime, content in data.items():
                shown.setdefault(cell["id"], {})[mime] = "".join(content)
    return shown


def elements(source):
    """Returns the names of the elements of HTML that is well-formed XML."""
    return [e.tag for e in ElementTree.fromstring(f"<div>{source}</div>").iter()]


def check_formulas(shown):
    for cell in ["model", "symbols"]:
        latex, html, plain = (shown[cell][mime] for mime in ["text/latex", "text/html", "text/plain"])
        require(latex.startswith("$$\n\\begin{aligned}\nT_{\\mathrm{cargo}} &= "), f"{cell}: LaTeX starts {latex[:40]!r}")
        require(latex.count(" &= ") == 2 and latex.count("{") == latex.count("}"), f"{cell}: LaTeX is {latex}")
        require(elements(html).count(MATH + "math") >= 4, f"{cell}: formulas are missing in HTML")
        require("leaves exactly 0" in plain and "leaves exactly 0" in html, f"{cell}: no proof")
    terms = {"50/3*exp(-t/10)", "2/3*exp(-5*t/2)", "10*exp(-t/10)", "6*exp(-5*t/2)"}
    require(all(term in shown["model"]["text/plain"] for term in terms), "model: " + shown["model"]["text/plain"])
    for condition in ["10·r ≠ 1", "2·r ≠ 5"]:
        require(condition in shown["symbols"]["text/html"], f"symbols: {condition} is missing")
    require(shown["assume"]["text/plain"] == "[]", "assume: conditions are left")
    require(elements(shown["modes"]["text/html"]).count("tr") == 3, "modes: not two eigenvalues")


def check_table(shown, digits, want):
    """want holds, for each time, the values of cargo and air."""
    lines = shown["text/plain"].splitlines()
    require(lines[0].split() == ["t", "T_cargo", "T_air"] and len(lines) == len(want) + 1, f"table: {lines}")
    for line, (t, values) in zip(lines[1:], want.items()):
        time, *got = line.split()
        require(Decimal(time) == t, f"table: {line}")
        for g, w in zip(got, values, strict=True):
            require(len(g.replace(".", "")) == digits, f"table: {g} has not {digits} digits")
            require(abs(Decimal(g) - w) <= Decimal(1).scaleb(w.adjusted() - digits + 1) / 2, f"table: {g} is not {w}")
            require(g in shown["text/html"] and g in shown["text/latex"], f"table: {g} is not in HTML and LaTeX")
    require(MATH + "math" in elements(shown["text/html"]), "table: names are missing")


def sound(t):
    """Both modes about 4 °C, by hand: eigenvalues -1/10 and -5/2."""
    slow, fast = (-t / 10).exp(), (-5 * t / 2).exp()
    return 4 + 50 * slow / 3 - 2 * fast / 3, 4 + 10 * slow + 6 * fast


def resonant(t):
    """Power 1.3 exp(-t/10), by hand, about 30 °C. The input -26 exp(-t/10) of the
    air gives a t exp(-t/10) (5/3, 1) + b exp(-t/10) (1, 0) + modes (5, 3) and (-1, 9)."""
    # (A + 1/10) v b = a w - input, with w = (5/3, 1) the slow mode and v = (1, 0):
    # -0.15 b = 5 a / 3 and 1.35 b = a + 26.
    a = Decimal(26) / -16
    b = 5 * a / 3 / Decimal("-0.15")
    # At 0: b + 5 p - q = -10 and 3 p + 9 q = -10.
    p = (9 * (-10 - b) - 10) / 48
    q = 5 * p + 10 + b
    slow, fast = (-t / 10).exp(), (-5 * t / 2).exp()
    cargo = 30 + (a * t * 5 / 3 + b + 5 * p) * slow - q * fast
    return cargo, 30 + (a * t + 3 * p) * slow + 9 * q * fast


def check_plots(shown):
    for cell, lines in [("plot", 2), ("fading", 4)]:
        svg = ElementTree.fromstring(shown[cell]["image/svg+xml"])
        paths = [e for e in svg.iter("{http://www.w3.org/2000/svg}path") if e.get("d").count("L") > 100]
        require(len(paths) == lines, f"{cell}: {len(paths)} lines of {lines}")
        require(shown[cell]["image/svg+xml"] in shown[cell]["text/html"], f"{cell}: no drawing in HTML")


def main():
    getcontext().prec = 60
    text = KEPT.read_text(encoding="utf-8")
    check_kept(json.loads(text), text)
    shown = outputs_of(json.loads(Path(sys.argv[1]).read_text(encoding="utf-8")))
    check_formulas(shown)
    check_table(shown["values"], 30, {t: sound(Decimal(t)) for t in [1, 6, 24, 48]})
    check_table(shown["excluded"], 17, {t: resonant(Decimal(t)) for t in [6, 24, 48]})
    check_plots(shown)
    require("after 28.13 h" in shown["crossing"]["printed"], shown["crossing"]["printed"])
    require(shown["errors"]["printed"].startswith("line 3, column 11: nonlinear: "), shown["errors"]["printed"])
    require("\npackage " in shown["go"]["printed"], "go: no Go source")
    print("the notebook is as it should be")


if __name__ == "__main__":
    main()
