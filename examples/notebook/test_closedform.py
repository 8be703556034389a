"""Tests of closedform.py: python3 -m unittest, in this folder."""

import html.parser
import json
import math
import os
import re
import signal
import sys
import tempfile
import textwrap
import threading
import unittest
from decimal import Decimal, localcontext
from fractions import Fraction
from unittest import mock
from xml.etree import ElementTree

import closedform
from closedform import Bridge, Model, ModelError, draw_lines

DECAY = "x' = -2*x\nx(0) = 1"
CHAIN = "x' = -ka*x\ny' = ka*x - ke*y\nx(0) = D\ny(0) = 0"


def tearDownModule():
    closedform._shared.close()


def stand_in(test, body):
    """Returns a Bridge to a program in Python; body answers the request r."""
    program = textwrap.dedent(
        """
        import json, os, sys, time
        for line in sys.stdin:
            r = json.loads(line)
        """
    ) + textwrap.indent(textwrap.dedent(body), "    ")
    bridge = Bridge([sys.executable, "-u", "-c", program])
    test.addCleanup(bridge.close)
    return bridge


class Markup(html.parser.HTMLParser):
    """Collects the names of elements and attributes, and the text."""

    def __init__(self, source):
        super().__init__()
        self.elements, self.attributes, self.content = set(), set(), ""
        self.feed(source)
        self.close()

    def handle_starttag(self, tag, attrs):
        self.elements.add(tag)
        self.attributes.update(name for name, _ in attrs)

    def handle_data(self, data):
        self.content += data


class Answers(unittest.TestCase):
    def test_response(self):
        r = Model(DECAY).response()
        self.assertEqual(r.states, ["x"])
        x = r.solution["x"]
        self.assertEqual((x.text, str(x), repr(x)), ("exp(-2*t)",) * 3)
        self.assertIn("e^{", x.latex)
        self.assertEqual(ElementTree.fromstring(x.mathml).tag, "{http://www.w3.org/1998/Math/MathML}math")
        self.assertEqual(r.transient["x"].text, "exp(-2*t)")
        self.assertEqual(r.steady["x"].text, "0")
        self.assertEqual([(m.factor, m.multiplicity, m.roots[0].exact) for m in r.modes], [("s + 2", 1, "-2")])
        self.assertEqual(r.modes[0].roots[0].decimal(), "-2")
        self.assertEqual(r.conditions, [])
        self.assertEqual((r.proof.residual, r.proof.sides, r.proof.holds), ("0", "0", True))
        self.assertIn("package ", r.go())

    def test_form(self):
        model = Model("x'' + 2*x' + 5*x = 10\nx(0) = 0\nx'(0) = 0")
        x = model.response(amplitude=True, steady_last=True).solution["x"]
        self.assertEqual(x.text, "-sqrt(5)*exp(-t)*cos(2*t - atan(1/2)) + 2")
        x = model.response(numbers="decimal", digits=4, amplitude=True).solution["x"]
        self.assertEqual(x.text, "2 - 2.236*exp(-t)*cos(2*t - 0.4636)")
        with self.assertRaises(ModelError):
            model.response(numbers="roman")

    def test_values(self):
        with localcontext(prec=60):
            want = Decimal(-1).exp()
            table = Model(DECAY).response().at(["1/2", 0.5, Fraction(1, 2), Decimal("0.50")], digits=40)
            self.assertEqual(table.times, ["1/2", "0.5", "1/2", "0.50"])
            self.assertEqual(table["x"], [str(want.quantize(Decimal(1).scaleb(-40)))] * 4)
        values = Model(DECAY).response().values([0, 0.25, 3])
        self.assertEqual(values["x"][0], 1.0)
        for got, t in zip(values["x"], [0, 0.25, 3]):
            self.assertTrue(math.isclose(got, math.exp(-2 * t), rel_tol=1e-15))
        self.assertEqual(Model(DECAY).response().at([]), {"x": []})
        self.assertEqual(len(Model(DECAY).response().at("1/3")["x"]), 1)
        for bad, kind in [(math.nan, ValueError), (Decimal("inf"), ValueError), (None, TypeError), ("noon", ModelError)]:
            with self.subTest(bad), self.assertRaises(kind):
                Model(DECAY).response().at([bad])

    def test_symbols(self):
        r = Model(CHAIN).response()
        self.assertEqual(r.conditions, ["ka != ke"])
        self.assertIn("Holds where ka ≠ ke.", repr(r))
        # Equal rates are an excluded case of the formula, not of the model.
        got = r.at([1], digits=30, set={"ka": 1, "ke": Fraction(1), "D": "exp(1)"})
        self.assertEqual([Decimal(column[0]) for column in got.values()], [1, 1])
        self.assertEqual(Model(CHAIN, assume=["ka > ke > 0"]).response().conditions, [])
        self.assertEqual(Model(CHAIN, assume="ka > ke").response().conditions, [])
        with self.assertRaises(ModelError) as caught:
            r.at([1], set={"ka": 1, "D": 1})
        self.assertEqual(caught.exception.kind, "needs an assumption")

    def test_general_solution(self):
        r = Model("x'' = -x + 1").response()
        self.assertIn("C1", r.solution["x"].text)
        self.assertEqual(r.values([0], set={"C1": Decimal("0.5"), "C2": 0})["x"], [1.5])

    def test_unicode(self):
        r = Model("θ_1' = -θ_1; Жук' = 0; 温度' = 温度\nθ_1(0) = 1; Жук(0) = 2; 温度(0) = 1").response()
        self.assertEqual(r.states, ["θ_1", "Жук", "温度"])
        self.assertEqual(r.values([0])["Жук"], [2.0])
        self.assertIn(r"\theta_{1} &= ", r._repr_mimebundle_()["text/latex"])
        self.assertIn("温度", r._repr_mimebundle_()["text/html"])
        # A state named t leaves the time to the independent variable.
        t = Model("independent s\nt' = 1\nt(0) = 5").response().at([1])
        self.assertEqual((t.variable, t.times, float(t["t"][0])), ("s", ["1"], 6.0))


class Errors(unittest.TestCase):
    def test_place(self):
        with self.assertRaises(ModelError) as caught:
            Model("x' = -x\n\ty' = x*y\n").response()
        e = caught.exception
        self.assertEqual((e.kind, e.line, e.column), ("nonlinear", 2, 7))
        self.assertTrue(str(e).startswith("line 2, column 7: nonlinear: "))
        self.assertEqual(e.marked, "\ty' = x*y\n\t     ^")
        for end in ["\n", "\r\n", "\r", "\u2028", "\u2029", "\x85"]:
            with self.subTest(end), self.assertRaises(ModelError) as caught:
                Model(f"x' = 1{end}{end}y' = θ + *{end}").response()
            self.assertEqual(caught.exception.marked, "y' = θ + *\n         ^")

    def test_no_place(self):
        with self.assertRaises(ModelError) as caught:
            Model(DECAY).response().at([1], digits=10**9)
        e = caught.exception
        self.assertEqual((e.kind, e.line, e.column, e.marked), ("limit exceeded", None, None, ""))

    def test_process_lives_on(self):
        bridge = Bridge()
        self.addCleanup(bridge.close)
        Model(DECAY, bridge=bridge).response()
        before = bridge.pid
        for text in ["x' = (", "", "x' = <script>", "\ud800", "x' = \"x\"; import \"os\""]:
            with self.subTest(text), self.assertRaises(ModelError):
                Model(text, bridge=bridge).response()
        self.assertEqual(bridge.pid, before)

    def test_working_is_passed_through(self):
        bridge = stand_in(self, "print(json.dumps({'id': r['id'], 'working': r['want']}))")
        r = Model(DECAY).response()
        r.model.bridge = bridge
        self.assertEqual(r.working(), ["working"])


class Processes(unittest.TestCase):
    def test_dead_process_is_replaced(self):
        bridge = Bridge()
        self.addCleanup(bridge.close)
        self.assertIsNone(bridge.pid)
        r = Model(DECAY, bridge=bridge).response()
        for _ in range(3):
            dead = bridge.pid
            os.kill(dead, signal.SIGKILL)
            self.assertEqual(r.values([0])["x"], [1.0])
            self.assertNotEqual(bridge.pid, dead)
        bridge.close()
        self.assertIsNone(bridge.pid)
        self.assertEqual(r.values([0])["x"], [1.0])

    def test_request_is_sent_once_more(self):
        with tempfile.TemporaryDirectory() as folder:
            log = os.path.join(folder, "log")
            bridge = stand_in(
                self,
                f"""
                with open({log!r}, "a") as f: f.write(line)
                if os.path.getsize({log!r}) == len(line):
                    print('{{"id": ', end="")  # half an answer
                    sys.exit("out of memory")
                print(json.dumps({{"id": r["id"], "ok": True}}))
                """,
            )
            self.assertTrue(bridge.request({"model": "x"})["ok"])
            with open(log) as f:
                first, second = f.readlines()
            self.assertEqual(first, second)

    def test_request_that_kills(self):
        bridge = stand_in(self, "sys.exit('out of memory')")
        with self.assertRaises(ModelError) as caught:
            bridge.request({"model": "x"})
        self.assertEqual(caught.exception.kind, "internal")
        self.assertIn("out of memory", caught.exception.message)
        self.assertIsNone(bridge.pid)

    def test_another_program(self):
        for body in ["print('hello')", "print('[]')", "print('{\"id\": 0}')", "print('null')"]:
            with self.subTest(body), self.assertRaises(ModelError) as caught:
                stand_in(self, body).request({"model": "x"})
            self.assertEqual(caught.exception.kind, "internal")

    def test_time_limit_of_the_bridge(self):
        bridge = Bridge(timeout=0.05)
        self.addCleanup(bridge.close)
        n = 60
        rows = (
            f"x{i}' = " + " ".join(f"+ {(i * 7 + j * 13) % 97}/{(i * i + 3 * j) % 89 + 1}*x{j}" for j in range(n))
            for i in range(n)
        )
        with self.assertRaises(ModelError) as caught:
            Model("\n".join(rows), bridge=bridge).response()
        self.assertEqual(caught.exception.kind, "cancelled")
        self.assertIsNotNone(bridge.pid)  # the bridge itself keeps the limit

    def test_silent_process_is_ended(self):
        bridge = stand_in(self, "print(json.dumps({'id': r['id']})) if 'quick' in r else time.sleep(60)")
        bridge._timeout = 0
        with mock.patch.object(closedform, "_GRACE", 1.0):
            with self.assertRaises(ModelError) as caught:
                bridge.request({})
            self.assertEqual(caught.exception.kind, "cancelled")
            self.assertIsNone(bridge.pid)

    def test_interrupt(self):
        # The answer to an interrupted request is not taken for another's.
        bridge = Bridge()
        self.addCleanup(bridge.close)
        with mock.patch.object(closedform._Process, "exchange", side_effect=KeyboardInterrupt):
            with self.assertRaises(KeyboardInterrupt):
                bridge.request({"model": DECAY})
        self.assertEqual(Model("x' = 1\nx(0) = 0", bridge=bridge).response().solution["x"].text, "t")

    def test_ends_with_its_bridge(self):
        bridge = Bridge()
        bridge.request({"model": DECAY})
        process = bridge._process.popen
        del bridge
        self.assertIsNotNone(process.poll())

    def test_program_from_the_environment(self):
        with tempfile.TemporaryDirectory() as folder:
            path = os.path.join(folder, "a bridge")
            with open(path, "w") as f:
                f.write("#!/bin/sh\nread line; echo '{\"id\": 1, \"ok\": true}'\n")
            os.chmod(path, 0o755)
            with mock.patch.dict(os.environ, {"CLOSEDFORM_BRIDGE": path}):
                self.assertTrue(Bridge().request({})["ok"])
        with mock.patch.dict(os.environ, {"CLOSEDFORM_BRIDGE": path}), self.assertRaises(OSError):
            Bridge().request({})

    def test_many_requests(self):
        bridge = Bridge()
        self.addCleanup(bridge.close)
        for k in range(300):
            answer = bridge.request({"model": f"x' = {k}\nx(0) = 0", "at": [1], "want": []})
            self.assertEqual(float(answer["values"][0]["x"]), k)

    def test_threads(self):
        bridge = Bridge()
        self.addCleanup(bridge.close)
        wrong = []

        def work(k):
            for i in range(20):
                got = Model(f"x' = {k}\nx(0) = {i}", bridge=bridge).response().values([1])["x"]
                if got != [float(k + i)]:
                    wrong.append((k, i, got))
                if k == 0 and i % 7 == 0:
                    bridge.close()  # the others go on

        threads = [threading.Thread(target=work, args=(k,)) for k in range(8)]
        for t in threads:
            t.start()
        for t in threads:
            t.join()
        self.assertEqual(wrong, [])


HOSTILE = [
    "<script>alert(1)</script>", '"><img src=x onerror=alert(1)>', "</mi></math>", "&lt;", "<!--", "]]>", "a_<b>_'c'",
    r"\write18{x}", r"\input{x}", "}{", "$x$", "%", "#1", "^^41", "~", "{", "\\", "x\n", "\u202eevil", "_", "", "λ_温度", "ς",
]


class Displays(unittest.TestCase):
    def test_bundles(self):
        r = Model("T_air' = -T_air/2 + sin(t); omega' = 1e-30*omega\nT_air(0) = 1; omega(0) = 1e-30").response()
        table = r.at(["-1/2", 7])
        for shown in [r, r.solution, r.transient, r.steady, r.solution["T_air"], table]:
            bundle = shown._repr_mimebundle_()
            self.assertEqual(bundle["text/plain"], repr(shown))
            self.assertEqual(bundle["text/latex"].count("{"), bundle["text/latex"].count("}"))
            ElementTree.fromstring("<p>" + bundle["text/html"] + "</p>")
            self.assertIn("<math ", bundle["text/html"])
        self.assertIn("\\begin{aligned}\nT_{\\mathrm{air}} &= ", r._repr_mimebundle_()["text/latex"])
        self.assertIn(" \\\\\n\\omega &= ", r._repr_mimebundle_()["text/latex"])
        self.assertIn(r"\cdot 10^{-30}", table._repr_mimebundle_()["text/latex"])
        self.assertIn("leaves exactly 0", r._repr_mimebundle_()["text/html"])
        self.assertIn("eigenvalue", r.modes._repr_mimebundle_()["text/html"])

    def test_decimals_of_roots(self):
        roots = [root.decimal() for mode in Model("x''' + 2*x'' + 5*x' = 0\ny'' = -4*y").response().modes for root in mode.roots]
        self.assertEqual(sorted(roots), sorted(["0", "-1 + 2 i", "-1 - 2 i", "2 i", "-2 i"]))
        self.assertEqual(Model("x' = -k*x").response().modes[0].roots[0].decimal(), "")

    def test_hostile_names_are_inert(self):
        # The bridge lets no such name through; the displays do not rely on it.
        body = f"""
            names = {HOSTILE!r}
            name = r["model"].split()[2].removesuffix("'")  # of a model for a name
            forms = {{n: {{"text": n, "latex": "0", "mathml": "<math xmlns='m'><mn>0</mn></math>"}} for n in [*names, name]}}
            print(json.dumps({{
                "id": r["id"], "states": names, "more": 1, "solution": forms, "steady": forms, "transient": forms,
                "modes": [{{"factor": n, "multiplicity": 1, "roots": [{{"exact": n}}]}} for n in names],
                "values": [dict([("τ<b>", "<i>")] + [(n, "<u>") for n in names])],
                "proof": {{"residual": "<s>", "sides": "<s>", "holds": False}}, "conditions": names, "remarks": names,
            }}))
            """
        r = Model("no real model", bridge=stand_in(self, body)).response()
        for shown in [r, r.solution, r.modes, r.at(["<b>"])]:
            bundle = shown._repr_mimebundle_()
            found = Markup(bundle["text/html"])
            allowed = {"div", "table", "tr", "th", "td", "p", "math", "mi", "mn", "mo", "msub"}
            self.assertLessEqual(found.elements, allowed)
            self.assertLessEqual(found.attributes, {"style", "xmlns", "displaystyle"})
            if shown in (r, r.modes):
                self.assertIn("<script>alert(1)</script>", found.content)  # as text

    def test_names(self):
        # States are written as symbols are, whatever other names there are.
        names = "x X x_1 k12 T_in omega0 ω_0 Δp x₁ ς été x_ _ a_b₁ w ww www wwww u uu uuu C1 温度 e i s".split()
        text = "\n".join(["independent s1", *(f"{name}' = 0" for name in names), "t' = 1"])
        latex = Model(text).response()._repr_mimebundle_()["text/latex"]
        for name in [*names, "t"]:
            written = Model(f"independent s1\nzz' = 0\nzz(0) = {name}").response().solution["zz"]
            self.assertIn(f"\n{written.latex} &= ", latex)
            self.assertEqual(Model(text).bridge.written_name(name), written)


class Drawings(unittest.TestCase):
    def test_lines(self):
        svg = draw_lines([0, 1, 2], {"<script>": [1.0, -2.0, 3.5], "b": [math.nan, 1, math.inf]}, "t", "<up>")
        self.assertEqual(svg._repr_mimebundle_()["image/svg+xml"], svg.svg)
        root = ElementTree.fromstring(svg.svg)
        self.assertEqual({e.tag.split("}")[1] for e in root.iter()}, {"svg", "title", "rect", "path", "text"})
        self.assertNotIn("nan", svg.svg)
        self.assertIn("−2", list(root.itertext()))

    def test_odd_data(self):
        for times, lines in [
            ([], {}), ([], {"x": []}), ([1], {"x": [1]}), ([0, 1], {"x": [0, 0]}), ([0, 1], {"x": [1e300, -1e300]}),
            ([0, 1], {"x": [1e-300, 2e-300]}), ([5, 5], {"x": [math.inf, math.nan]}), ([0, 1], {"x": [1, 1 + 1e-12]}),
        ]:
            with self.subTest(times=times, lines=lines):
                ElementTree.fromstring(draw_lines(times, lines).svg)
        with self.assertRaises(ValueError):
            draw_lines([0, 1], {"x": [1]})

    def test_ticks(self):
        for values in [[0, 1], [-3, 17], [0.001, 0.0012], [5, 5], [0], [], [-1e9, 1e9], [0.1, 0.9], [1, 9.99]]:
            ticks = closedform._ticks(values)
            self.assertTrue(3 <= len(ticks) <= 9, (values, ticks))
            self.assertTrue(ticks[0] <= min(values, default=0) and max(values, default=1) <= ticks[-1], (values, ticks))


if __name__ == "__main__":
    unittest.main()
