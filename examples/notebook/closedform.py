"""closedform in Python: exact responses of linear models, for notebooks.

A model is stated as text; its response is derived and proven by the bridge, a
program of this project (examples/bridge) that runs beside Python:

    from closedform import Model, ModelError, draw_lines

    model = Model("x' = -k*x + 1\\nx(0) = 0", assume=["k > 0"])
    response = model.response()            # shows itself in a notebook
    response.solution["x"].text            # '1/k - 1/k*exp(-k*t)'; also .latex, .mathml
    response.transient, response.steady    # its parts
    response.modes, response.conditions, response.proof
    response.at(["1/2", 3], digits=40, set={"k": "1/3"})     # proven decimals
    curves = response.values([0, 1, 2], set={"k": "1/3"})    # floats
    draw_lines([0, 1, 2], curves)          # a plot as SVG
    response.go()                          # Go source of the response

Numbers may be given as int, Fraction, Decimal, float or text such as "1/3",
and in set as expressions such as "pi/4" too. All are taken exactly; a float
means the decimal number that Python prints for it.

What the bridge refuses is raised as a ModelError with kind, message, line and
column. The bridge is built with the go command when it is first needed, unless
the environment variable CLOSEDFORM_BRIDGE names the program, or a Bridge is
made with its path and given to the models: Model(text, bridge=Bridge(path)).

Only the standard library is used. All objects may be used from several threads.
"""

import atexit
import contextlib
import functools
import html
import json
import math
import numbers
import os
import queue
import re
import shutil
import subprocess
import tempfile
import threading
import weakref
from dataclasses import dataclass, fields
from decimal import Decimal
from pathlib import Path

__all__ = ["Bridge", "Model", "ModelError", "Response", "draw_lines"]

# How long a bridge may outlive its own time limit before it is ended.
_GRACE = 5.0


class ModelError(Exception):
    """What is wrong with a model or a request.

    kind is a word of the library such as "nonlinear", or "internal" for a fault
    of the bridge; line and column count from 1 in model, or are None.
    """

    def __init__(self, kind, message, line=None, column=None, model=""):
        super().__init__(kind, message, line, column, model)
        self.kind, self.message, self.line, self.column, self.model = self.args

    def __str__(self):
        place = f"line {self.line}, column {self.column}: " if self.line else ""
        return f"{place}{self.kind}: {self.message}"

    @property
    def marked(self):
        """The line of the model at fault with a mark below, or ''."""
        if not self.line:
            return ""
        line = re.split("\r\n|[\r\n\x85\u2028\u2029]", self.model)[self.line - 1]
        # Tabs are kept, so that the mark stands below its column.
        indent = re.sub(r"[^\t]", " ", line[: self.column - 1])
        return f"{line}\n{indent}^"


class Bridge:
    """A bridge process that answers requests, one at a time.

    program is the path of the bridge or a list with its arguments; without it,
    CLOSEDFORM_BRIDGE is used or the bridge is built. timeout limits each
    request, in seconds; without it the bridge's own limit of a minute holds.

    The process starts with the first request, is started anew if it has died,
    and ends with close, with Python, or when the Bridge is no longer used.
    """

    def __init__(self, program=None, timeout=None):
        self._program = [program] if isinstance(program, (str, os.PathLike)) else program
        self._timeout = timeout
        self._lock = threading.Lock()
        self._count = 0
        self._process = self._end = None
        self._names = {}

    def request(self, question):
        """Returns the response to a request, both as dicts.

        A request whose process died is sent once more to a new one.
        """
        with self._lock:
            self._count += 1
            line = json.dumps({**question, "id": self._count}).encode("ascii") + b"\n"
            try:
                answer = self._answer(line)
            except BaseException:
                # An answer to come would be taken for that of the next request.
                self._close()
                raise
        if error := answer.get("error"):
            place = error.get("line"), error.get("column")
            raise ModelError(error["kind"], error["message"], *place, str(question.get("model", "")))
        return answer

    def written_name(self, name):
        """Returns a state's name as the bridge writes names in formulas."""
        if name not in self._names:
            # The constant function of that value; the longer names are other ones.
            state, time = "w" * (len(name) + 1), "u" * (len(name) + 1)
            text = f"independent {time}\n{state}' = 0\n{state}(0) = {name}"
            answer = self.request({"model": text, "want": ["text", "latex", "mathml"]})
            self._names[name] = _record(Formula, answer["solution"][state])
        return self._names[name]

    @property
    def pid(self):
        """The id of the process, or None if none has been started."""
        with self._lock:
            return self._process.popen.pid if self._process else None

    def close(self):
        """Ends the process; another request would start a new one."""
        with self._lock:
            self._close()

    def _answer(self, line):
        limit = None if self._timeout is None else self._timeout + _GRACE
        for _ in range(2):
            if self._process is None:
                self._start()
            written = self._process.exchange(line, limit)
            if written is not None:
                break
            said = self._process.complaints()
            self._close()
        else:
            raise ModelError("internal", "the bridge ended before it answered" + (": " + said if said else ""))
        try:
            answer = json.loads(written)
        except ValueError:
            answer = None
        if not isinstance(answer, dict) or answer.get("id") != self._count:
            raise ModelError("internal", "the program does not answer as the bridge does")
        return answer

    def _start(self):
        command = self._program
        if command is None:
            named = os.environ.get("CLOSEDFORM_BRIDGE")
            command = [named] if named else [_built()]
        command = [os.fspath(part) for part in command]
        if self._timeout is not None:
            command += ["-timeout", f"{self._timeout:f}s"]
        self._process = _Process(command)
        self._end = weakref.finalize(self, self._process.end)

    def _close(self):
        if self._process:
            self._end()
            self._process = self._end = None


class _Process:
    """A child process that answers lines with lines."""

    def __init__(self, command):
        self._errors = tempfile.TemporaryFile()
        pipes = {"stdin": subprocess.PIPE, "stdout": subprocess.PIPE, "stderr": self._errors}
        try:
            # A session of its own: an interrupt of the notebook is ours to handle.
            self.popen = subprocess.Popen(command, start_new_session=True, **pipes)
        except OSError:
            self._errors.close()
            raise
        self._lines = queue.SimpleQueue()
        threading.Thread(target=_pass_lines, args=(self.popen.stdout, self._lines), daemon=True).start()

    def exchange(self, line, timeout):
        """Returns the answer to a line, or None if the process has ended."""
        try:
            self.popen.stdin.write(line)
            self.popen.stdin.flush()
        except OSError:
            return None
        try:
            return self._lines.get(timeout=timeout)
        except queue.Empty:
            raise ModelError("cancelled", "the time limit is up, and the bridge did not answer") from None

    def complaints(self):
        """Returns the beginning of what a dead process wrote as errors."""
        with contextlib.suppress(subprocess.TimeoutExpired):  # it closed its output, but lives
            self.popen.wait(_GRACE)
        self._errors.seek(0)
        return self._errors.read(1000).decode("utf-8", "replace").strip()

    def end(self):
        """Ends the process and waits for it."""
        self.popen.kill()
        self.popen.wait()
        with contextlib.suppress(OSError):  # the rest of a request that nobody reads
            self.popen.stdin.close()
        self._errors.close()


def _pass_lines(stream, lines):
    """Puts the lines of a stream into a queue, and None at its end."""
    with stream:
        for line in stream:
            if line.endswith(b"\n"):  # else the process died while it wrote
                lines.put(line)
    lines.put(None)


_build_lock = threading.Lock()
_build_path = None


def _built():
    """Builds the bridge, once in a Python process, and returns its path."""
    global _build_path
    with _build_lock:
        if _build_path is None:
            folder = tempfile.mkdtemp(prefix="closedform-")
            atexit.register(shutil.rmtree, folder, ignore_errors=True)
            path = os.path.join(folder, "bridge")
            if not shutil.which("go"):
                raise RuntimeError("no go command to build the bridge with; set CLOSEDFORM_BRIDGE to its path")
            command = ["go", "build", "-o", path, "./bridge"]
            done = subprocess.run(command, cwd=Path(__file__).resolve().parents[1], capture_output=True, text=True)
            if done.returncode:
                raise RuntimeError("the bridge cannot be built:\n" + done.stderr.strip())
            _build_path = path
        return _build_path


_shared = Bridge()  # its process starts with the first request


class Model:
    """A model as text, with assumptions such as "k1 > k2 > 0" on its symbols."""

    def __init__(self, text, assume=(), bridge=None):
        self.text = text
        self.assume = [assume] if isinstance(assume, str) else list(assume)
        self.bridge = bridge or _shared

    def __repr__(self):
        return self.text.strip("\n")

    def response(self, **form):
        """Derives the response, exactly and with its proof.

        form says how its formulas are written: numbers="exact", "mixed" (long
        ones as decimals) or "decimal", digits=6 of these, amplitude=True for
        amplitude and phase, steady_last=True for decaying terms first.
        """
        return Response(self, self._ask(form=form, want=["text", "latex", "mathml", "modes"]))

    def _ask(self, **more):
        return self.bridge.request({"model": self.text, "assume": self.assume, **more})


class Response:
    """The response of a model in closed form.

    states      names of the states, in the order of the model
    solution    the states as functions: a dict of Formula
    transient   complementary functions, likewise
    steady      particular integrals, likewise
    modes       factors of the characteristic polynomial: a list of Mode
    conditions  what the symbols must satisfy for the formulas to hold
    remarks     what else is to be known of the formulas
    proof       a Proof
    """

    def __init__(self, model, answer):
        self.model, self.states, self.conditions = model, answer["states"], answer["conditions"]
        self.solution = Formulas(answer["solution"], model.bridge.written_name)
        self.transient = Formulas(answer["transient"], model.bridge.written_name)
        self.steady = Formulas(answer["steady"], model.bridge.written_name)
        self.modes = Modes(answer["modes"])
        self.remarks = answer.get("remarks", [])
        self.proof = _record(Proof, answer["proof"])

    def at(self, times, digits=17, set=None):
        """Returns decimals of the states at the times: a Table.

        All digits are right, the last one rounded to nearest. set gives values
        to symbols and to the constants of a general solution.
        """
        times = [times] if isinstance(times, (str, numbers.Number)) else list(times)
        values = {name: _exact(value) for name, value in (set or {}).items()}
        rows = self.model._ask(want=[], at=[_exact(t) for t in times], digits=digits, set=values)["values"]
        return Table(self.states, rows, self.model.bridge.written_name)

    def values(self, times, set=None):
        """Returns the states at the times as lists of float, in a dict."""
        return {name: [float(x) for x in column] for name, column in self.at(times, set=set).items()}

    def go(self):
        """Returns Go source that evaluates the response."""
        return self.model._ask(want=["go"])["go"]

    def working(self):
        """Returns the derivation step by step, as the bridge writes it."""
        return self.model._ask(want=["working"])["working"]

    def _notes(self):
        conditions = ", ".join(self.conditions).replace("!=", "≠").replace("*", "·")
        return [*([f"Holds where {conditions}."] if conditions else []), *self.remarks, str(self.proof)]

    def __repr__(self):
        return "\n".join([repr(self.solution), *self._notes()])

    def _repr_mimebundle_(self, include=None, exclude=None):
        bundle = self.solution._repr_mimebundle_()
        bundle["text/plain"] = repr(self)
        bundle["text/html"] += "".join(f'<div style="{_CELL}">{html.escape(note)}</div>' for note in self._notes())
        return bundle


def _record(kind, answer):
    """Returns a dataclass with what it has fields for; a bridge may tell more."""
    return kind(**{field.name: answer[field.name] for field in fields(kind) if field.name in answer})


@dataclass(frozen=True)
class Proof:
    """What is left of the equations and side conditions with the response put in."""

    residual: str
    sides: str
    holds: bool

    def __str__(self):
        if self.holds:
            return "Proven: put into the equations and side conditions, it leaves exactly 0."
        return f"Not proven: the equations leave {self.residual}, the side conditions {self.sides}."


@dataclass(frozen=True)
class Formula:
    """A function of time as text, LaTeX (for mathematics mode) and MathML."""

    text: str
    latex: str
    mathml: str

    def __repr__(self):
        return self.text

    def _repr_mimebundle_(self, include=None, exclude=None):
        written = {"text/latex": f"$\\displaystyle {self.latex}$", "text/html": _scrolling(_displayed(self.mathml))}
        return {"text/plain": self.text, **written}


class Formulas(dict):
    """Formulas by the names of the states."""

    def __init__(self, written, written_name):
        super().__init__((name, _record(Formula, forms)) for name, forms in written.items())
        self._written_name = written_name

    def __repr__(self):
        return "\n".join(f"{name} = {formula}" for name, formula in self.items())

    def _repr_mimebundle_(self, include=None, exclude=None):
        pairs = [(self._written_name(name), formula) for name, formula in self.items()]
        lines = [f"{left.latex} &= {right.latex}" for left, right in pairs]
        rows = [[left.mathml, _EQUALS, _displayed(right.mathml)] for left, right in pairs]
        return {
            "text/plain": repr(self),
            "text/latex": "$$\n\\begin{aligned}\n" + " \\\\\n".join(lines) + "\n\\end{aligned}\n$$",
            "text/html": _scrolling(_html_table(rows, ["right", "center", "left"])),
        }


@dataclass(frozen=True)
class Root:
    """An eigenvalue: exact as text; re and im as decimals, None with symbols in it."""

    exact: str
    re: str | None = None
    im: str | None = None

    def decimal(self):
        """Returns the value to six digits, or '' if it has symbols."""
        if self.re is None:
            return ""
        re, im = (f"{float(part):.6g}" for part in (self.re, self.im))
        if "0" in (re, im):
            return re if im == "0" else f"{im} i"
        return f"{re} {'-' if im[0] == '-' else '+'} {im.removeprefix('-')} i"


@dataclass(frozen=True)
class Mode:
    """An irreducible factor of the characteristic polynomial."""

    factor: str
    multiplicity: int
    roots: tuple[Root, ...]


class Modes(list):
    """The modes of a model."""

    _HEAD = ["factor", "multiplicity", "eigenvalue", "decimal"]

    def __init__(self, modes):
        super().__init__(
            _record(Mode, {**mode, "roots": tuple(_record(Root, root) for root in mode["roots"])}) for mode in modes
        )

    def _rows(self):
        rows = []
        for mode in self:
            head = [mode.factor, str(mode.multiplicity)]
            for root in mode.roots:
                rows.append([*head, root.exact, root.decimal()])
                head = ["", ""]
        return rows

    def __repr__(self):
        return _text_table([self._HEAD, *self._rows()])

    def _repr_mimebundle_(self, include=None, exclude=None):
        cells = [[html.escape(_signed(cell)) for cell in row] for row in self._rows()]
        table = _html_table(cells, ["left", "right", "left", "right"], self._HEAD)
        return {"text/plain": repr(self), "text/html": _scrolling(table)}


class Table(dict):
    """Values as lists of decimals by the names of the states; times is a list too."""

    def __init__(self, states, rows, written_name):
        super().__init__((name, [row[name] for row in rows]) for name in states)
        # The time's name is the one that is not a state's.
        self.variable = next((key for key in rows[0] if key not in self), "t") if rows else "t"
        self.times = [row[self.variable] for row in rows]
        self._written_name = written_name

    def _rows(self):
        return [list(row) for row in zip(self.times, *self.values())]

    def __repr__(self):
        return _text_table([[self.variable, *self], *self._rows()])

    def _repr_mimebundle_(self, include=None, exclude=None):
        names = [self._written_name(name) for name in [self.variable, *self]]
        rows = self._rows()
        cells = [[html.escape(_signed(cell)) for cell in row] for row in rows]
        head = " & ".join(name.latex for name in names) + " \\\\ \\hline\n"
        body = " \\\\\n".join(" & ".join(map(_latex_number, row)) for row in rows)
        array = "\\begin{array}{r|" + "r" * len(self) + "}\n" + head + body + "\n\\end{array}"
        return {
            "text/plain": repr(self),
            "text/latex": f"$$\n{array}\n$$",
            "text/html": _scrolling(_html_table(cells, ["right"] * len(names), [name.mathml for name in names])),
        }


def _exact(value):
    """Returns a number as text that stands for it exactly; text stays as it is."""
    if isinstance(value, str):
        return value
    if isinstance(value, numbers.Rational):
        return f"{int(value.numerator)}/{int(value.denominator)}" if value.denominator != 1 else str(int(value))
    if isinstance(value, (Decimal, numbers.Real)):
        if not math.isfinite(value):
            raise ValueError(f"{value} is not a finite number")
        return str(value if isinstance(value, Decimal) else float(value))
    raise TypeError(f"a number or a text is expected, not {type(value).__name__}")


def _signed(text):
    return text.replace("-", "−")  # for the eye


def _latex_number(number):
    return re.sub(r"[eE]\+?(-?\d+)$", r" \\cdot 10^{\1}", number)


def _text_table(rows):
    widths = [max(map(len, column)) for column in zip(*rows)]
    return "\n".join("  ".join(cell.rjust(w) for cell, w in zip(row, widths)).rstrip() for row in rows)


_EQUALS = '<math xmlns="http://www.w3.org/1998/Math/MathML"><mo>=</mo></math>'
_CELL = "vertical-align:baseline;padding:0.3em 0.5em"


def _html_table(rows, sides, head=None):
    """Writes cells of HTML as a table; sides says where the text of a column stands."""
    lines = []
    for tag, row in [*([("th", head)] if head else []), *(("td", row) for row in rows)]:
        cells = (f'<{tag} style="text-align:{side};{_CELL}">{cell}</{tag}>' for side, cell in zip(sides, row))
        lines.append('<tr style="background:none">' + "".join(cells) + "</tr>")
    return '<table style="font-size:1em;margin:0">' + "".join(lines) + "</table>"


def _scrolling(content):
    """Lets a formula be wider than the page."""
    return f'<div style="overflow-x:auto">{content}</div>'


def _displayed(mathml):
    """Writes fractions at full size. The bridge has escaped all names in mathml."""
    return mathml.replace("<math ", '<math displaystyle="true" ', 1)


# Plots. Lines differ in colour and in dashes, so that print without colour serves.
_STROKES = [("#1b4f8a", "none"), ("#b3541e", "7 4"), ("#3b7a3b", "2 3"), ("#7a3b75", "9 3 2 3"), ("#555555", "1 5")]
_WIDTH, _HEIGHT, _LEFT, _RIGHT, _TOP, _BOTTOM = 640, 340, 62, 490, 16, 292


@dataclass(frozen=True, repr=False)
class Drawing:
    """A drawing; svg is its text."""

    svg: str

    def __repr__(self):
        return "a drawing; .svg is its text"

    def _repr_mimebundle_(self, include=None, exclude=None):
        # The way to a page can strip an image, but leaves HTML alone.
        return {"text/html": _scrolling(self.svg), "image/svg+xml": self.svg, "text/plain": repr(self)}


def draw_lines(times, lines, across="t", up=""):
    """Draws lists of floats over the times: a Drawing.

    lines is a dict such as Response.values returns; its keys are the labels.
    across and up say what the axes are. Values that are not finite leave gaps.
    """
    xs = [float(x) for x in times]
    if any(len(ys) != len(xs) for ys in lines.values()):
        raise ValueError(f"the lines have not a value for each of the {len(xs)} times")
    x_ticks, y_ticks = _ticks(xs), _ticks([y for ys in lines.values() for y in ys])
    x_low, x_high = (min(xs), max(xs)) if len(set(xs)) > 1 else (x_ticks[0], x_ticks[-1])
    column = functools.partial(_between, x_low, x_high, _LEFT, _RIGHT)
    row = functools.partial(_between, y_ticks[0], y_ticks[-1], _BOTTOM, _TOP)
    middle, centre = (_TOP + _BOTTOM) / 2, (_LEFT + _RIGHT) / 2
    parts = [
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {_WIDTH} {_HEIGHT}" width="{_WIDTH}" height="{_HEIGHT}"'
        ' role="img" font-family="sans-serif" font-size="12" fill="#222222">',
        f"<title>{html.escape(up or ', '.join(lines))} over {html.escape(across)}</title>",
        f'<rect width="{_WIDTH}" height="{_HEIGHT}" fill="#ffffff"/>',
        _svg_text(centre, _HEIGHT - 10, across, "middle"),
        _svg_text(14, middle, up, "middle", f' transform="rotate(-90 14 {middle})"'),
    ]
    for x in filter(lambda x: x_low <= x <= x_high, x_ticks):
        parts.append(f'<path d="M{column(x):.1f} {_TOP}V{_BOTTOM}" stroke="#dddddd"/>')
        parts.append(_svg_text(column(x), _BOTTOM + 17, _signed(f"{x:.6g}"), "middle"))
    for y in y_ticks:
        parts.append(f'<path d="M{_LEFT} {row(y):.1f}H{_RIGHT}" stroke="#dddddd"/>')
        parts.append(_svg_text(_LEFT - 7, row(y) + 4, _signed(f"{y:.6g}"), "end"))
    parts.append(f'<path d="M{_LEFT} {_TOP}V{_BOTTOM}H{_RIGHT}" fill="none" stroke="#444444"/>')
    for number, (label, ys) in enumerate(lines.items()):
        colour, dashes = _STROKES[number % len(_STROKES)]
        stroke = f'fill="none" stroke="{colour}" stroke-width="1.8" stroke-dasharray="{dashes}"'
        path, pen = "", "M"
        for x, y in zip(xs, ys):
            path += f"{pen}{column(x):.1f} {row(y):.1f}" if math.isfinite(y) else ""
            pen = "L" if math.isfinite(y) else "M"
        level = _TOP + 10 + 20 * number
        parts += [f'<path d="{path}" {stroke}/>', f'<path d="M{_RIGHT + 12} {level}h26" {stroke}/>']
        parts.append(_svg_text(_RIGHT + 44, level + 4, label, "start"))
    return Drawing("\n".join([*parts, "</svg>"]))


def _svg_text(x, y, content, anchor, more=""):
    return f'<text x="{x:.1f}" y="{y:.1f}" text-anchor="{anchor}"{more}>{html.escape(content)}</text>'


def _between(low, high, first, last, value):
    return first + (value - low) / (high - low) * (last - first)


def _ticks(values):
    """Returns some round numbers from below the values to above them."""
    values = [v for v in values if math.isfinite(v)] or [0.0, 1.0]
    low, high = min(values), max(values)
    if high - low <= 1e-9 * max(abs(low), abs(high)):
        low, high = low - (abs(low) / 10 or 1), high + (abs(high) / 10 or 1)
    size = 10.0 ** math.floor(math.log10(high - low))
    step = next(step for step in (size / 5, size / 2, size, size * 2) if (high - low) / step <= 7)
    return [k * step for k in range(math.floor(low / step), math.ceil(high / step) + 1)]
