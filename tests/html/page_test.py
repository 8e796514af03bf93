"""The HTML report in a real browser, headless: what a reader does with it, on pages that the program has just written.

    python3 page_test.py PROGRAM FIXTURES [unittest options]

Needs Debian's chromium, chromium-driver and python3-selenium. The page's own functions and variables are called by name
where a test looks inside it.
"""

import json
import pathlib
import re
import subprocess
import sys
import tempfile
import unittest

from selenium import webdriver
from selenium.webdriver.chrome.service import Service
from selenium.webdriver.common.action_chains import ActionChains
from selenium.webdriver.common.by import By
from selenium.webdriver.common.keys import Keys

PROGRAM = FIXTURES = None
FOLDER = pathlib.Path(tempfile.mkdtemp(prefix="pathvet-html-"))
FLAGS = """--headless --no-sandbox --disable-gpu --disable-quic --no-first-run --disable-background-networking
 --disable-component-update --disable-sync""".split()
MOST_BYTES = 5_000_000  # without the libraries
LIBRARY_BYTES = 1_050_000
SINGLE = 1e-6  # curves are carried as 32-bit floats: relative


def write(name, *paths, options=()):
    """Runs the program; returns the page's place and the JSON report of the same run."""
    page, data = FOLDER / f"{name}.html", FOLDER / f"{name}.json"
    call = [PROGRAM, "check", *map(str, paths), "--quiet", "--html", str(page), "--json", str(data), *options]
    status = subprocess.run(call, check=False).returncode
    assert status in (0, 1), (call, status)
    return page, json.loads(data.read_text())


def zigzag(folder, count, id_of=lambda i: f"w{i}", name="there and back"):
    """A path that passes the wrist singularity on each of `count` segments."""
    text = (FIXTURES / "wrist-miss-0.5-mm.xml").read_text()
    waypoints = re.findall(r"<waypoint.*?</waypoint>", text, re.S)
    poses = [re.search(r"<pose[^>]*/>", w).group(0) for w in waypoints]
    head = text[: text.index(waypoints[0])].replace("../cells/", str(FIXTURES.parent / "cells") + "/")
    head = re.sub(r' name="[^"]*"', f' name="{name}"', head, count=1)
    body = [f'<waypoint id="{id_of(i)}" move="linear">{poses[(i + 1) % 2]}</waypoint>' for i in range(count)]
    file = FOLDER / folder
    file.write_text(head + "\n".join([waypoints[0], *body]) + "</path>\n")
    return file


class Page(unittest.TestCase):
    @classmethod
    def setUpClass(cls):
        options = webdriver.ChromeOptions()
        for flag in [*FLAGS, f"--user-data-dir={tempfile.mkdtemp(prefix='pathvet-browser-')}"]:
            options.add_argument(flag)
        options.binary_location = "/usr/bin/chromium"
        options.set_capability("goog:loggingPrefs", {"browser": "ALL", "performance": "ALL"})
        cls.browser = webdriver.Chrome(service=Service("/usr/bin/chromedriver"), options=options)

    @classmethod
    def tearDownClass(cls):
        cls.browser.quit()

    def open(self, page, width=1300, height=900):
        self.browser.execute_cdp_cmd("Emulation.setDeviceMetricsOverride",
                                     {"width": width, "height": height, "deviceScaleFactor": 1, "mobile": width < 500})
        for kind in ("browser", "performance"):
            self.browser.get_log(kind)
        self.browser.get(page.as_uri())
        self.assertEqual(self.ask("document.documentElement.dataset.ready"), "true")

    def ask(self, expression):
        return self.browser.execute_script(f"return {expression};")

    def next_picture(self):
        """Once all that waits for the next picture has been drawn."""
        self.browser.execute_async_script("const done = arguments[0]; requestAnimationFrame(() => requestAnimationFrame(done));")

    def tearDown(self):
        self.assertEqual([entry for entry in self.browser.get_log("browser") if entry["level"] != "INFO"], [])

    # A whole session on one page.

    def test_asks_the_network_for_nothing(self):
        page, _ = write("network", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        self.ask("showFinding(0)")
        self.next_picture()
        messages = [json.loads(entry["message"])["message"] for entry in self.browser.get_log("performance")]
        asked = [m["params"]["request"]["url"] for m in messages if m["method"] == "Network.requestWillBeSent"]
        # chrome: is the browser's own first tab, from inside the browser.
        self.assertEqual([url for url in asked if not url.startswith(("data:", "chrome:"))], [page.as_uri()])
        self.assertNotRegex(page.read_text(), r"""(src|href)=["']https?:""")
        self.assertIn("default-src 'none'", self.ask("document.querySelector('meta[http-equiv]').content"))

    def test_says_verdict_and_caution_first(self):
        page, report = write("verdict", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        words = self.browser.find_element(By.ID, "verdict").text
        self.assertIn("FLAGGED", words)
        self.assertIn(f"{report['errors']} errors, {report['warnings']} warning", words)
        self.assertIn(report["caution"], self.browser.find_element(By.CLASS_NAME, "caution").text)
        top = self.ask("document.querySelector('.caution').getBoundingClientRect().bottom")
        self.assertLess(top, 400)

    def test_each_row_leads_to_its_place(self):
        page, report = write("rows", FIXTURES / "out-of-reach-and-back.xml")
        findings = report["paths"][0]["findings"]
        self.open(page)
        buttons = self.browser.find_elements(By.CSS_SELECTOR, "#lists .lead")
        self.assertEqual(len(buttons), len(findings))
        for finding, button in zip(findings, buttons):
            self.browser.execute_script("arguments[0].scrollIntoView()", button)
            button.send_keys(Keys.ENTER)  # as somebody without a mouse does it
            self.next_picture()
            at = self.ask("[current().segment[state.row], current().fraction[state.row], state.finding]")
            self.assertEqual(at[0], finding["segment"])
            self.assertAlmostEqual(at[1], finding["peak"], delta=1e-6)
            self.assertEqual(at[2], finding["index"])
            before = sum(s["duration_s"] + s["dwell_s"] for s in report["paths"][0]["segments"][: finding["segment"] - 1])
            for window in self.ask("charts.map((chart) => chart.graph.xAxisRange())"):
                self.assertLessEqual(window[0], before + finding["begin_s"] + 1e-9)
                self.assertGreaterEqual(window[1], before + finding["end_s"] - 1e-9)
                stretch = finding["end_s"] - finding["begin_s"]
                self.assertLess(window[1] - window[0], 3 * stretch + 0.03 * report["paths"][0]["totals"]["duration_s"])
            self.assertIn(finding["code"], self.browser.find_element(By.ID, "current").text)
        top = self.ask("document.getElementById('along').getBoundingClientRect().top")
        self.assertLess(abs(top), 300)

    def test_cursor_moves_the_arm(self):
        for name in ("tool-change-and-dwell", "positioner-round-seam", "track-long-panel", "palletiser-linkage",
                     "seven-joints-inspection", "four-joints-lid"):
            page, _ = write(name, FIXTURES / f"{name}.xml")
            self.open(page)
            drawn = set()
            for share in (0, 0.3, 0.7, 1):
                self.browser.execute_script("setCursor((current().rows - 1) * arguments[0])", share)
                self.next_picture()
                tip, wanted = self.ask("[origin(view.arm.tcp), Array.from(current().tcp.subarray(3 * state.row, 3 * state.row + 3))]")
                # Where the page's own forward map puts the TCP, against the program's.
                for a, b in zip(tip, wanted):
                    self.assertAlmostEqual(a, b, delta=0.005, msg=f"{name} at {share}")
                drawn.add(self.ask("document.querySelector('#view svg').innerHTML"))
            self.assertEqual(len(drawn), 4, name)

    def test_pointing_at_a_chart_moves_every_cursor(self):
        page, _ = write("pointing", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page, height=1400)
        plot = self.browser.find_element(By.CSS_SELECTOR, "[data-chart=singular] .plot")
        self.browser.execute_script("arguments[0].scrollIntoView({block: 'center'})", plot)
        ActionChains(self.browser).move_to_element_with_offset(plot, 80, 0).perform()
        self.next_picture()
        self.assertGreater(self.ask("state.row"), 0)
        lines = self.ask("charts.map((chart) => chart.line.style.left)")
        self.assertEqual(len(set(lines)), 1)
        # Dragging zooms all of them.
        ActionChains(self.browser).move_to_element_with_offset(plot, -100, 0).click_and_hold() \
            .move_by_offset(150, 0).release().perform()
        self.next_picture()
        windows = self.ask("charts.map((chart) => chart.graph.xAxisRange().map((x) => x.toFixed(9)).join(' '))")
        self.assertEqual(len(set(windows)), 1)
        self.assertLess(self.ask("state.window[1] - state.window[0]"), 0.5 * self.ask("current().extent('time')[1]"))

    # The charts hold what the report says.

    def check_peaks(self, report, thinned):
        for joint, wanted in enumerate(report["paths"][0]["joints"]):
            key = f"position-{wanted['name']}"
            values = f"charts.find((c) => c.spec.key === {json.dumps(key)}).file().map((row) => row[1]).filter((v) => v !== null)"
            low, high = self.ask(f"((v) => [Math.min(...v), Math.max(...v)])({values})")
            # As near as a 32-bit float comes to a joint's value.
            size = max(abs(wanted["min"]), abs(wanted["max"]), 1)
            self.assertAlmostEqual(low, wanted["min"], delta=SINGLE * size, msg=key)
            self.assertAlmostEqual(high, wanted["max"], delta=SINGLE * size, msg=key)
            if wanted["speed_limit"] is None:
                continue
            speed = f"charts[0].spec.series.findIndex((s) => s.joint === {joint})"
            peak = self.ask(f"charts[0].file().reduce((most, row) => Math.max(most, row[1 + {speed}] ?? 0), 0)")
            self.assertAlmostEqual(peak, 100 * wanted["peak_ratio"], delta=SINGLE * 100 * max(wanted["peak_ratio"], 1e-3),
                                   msg=f"speed of {wanted['name']}")
        least = min(s["min_singular_value"] for s in report["paths"][0]["segments"])
        drawn = self.ask("Math.min(...charts.find((c) => c.spec.key === 'singular').file().map((r) => r[1]).filter((v) => v !== null))")
        self.assertAlmostEqual(drawn, least, delta=SINGLE * least + 1e-12)
        self.assertLess(self.ask("current().rows"), thinned)

    def test_charts_hold_the_peaks(self):
        for name in ("wrist-miss-0.5-mm", "joint-limit-deep-pocket", "out-of-reach-and-back", "track-long-panel",
                     "positioner-tilted-seam", "palletiser-linkage", "joint-jump-straight-wrist"):
            page, report = write(name, FIXTURES / f"{name}.xml")
            self.open(page)
            self.check_peaks(report, 30000)

    def test_out_of_reach_is_a_gap(self):
        page, report = write("gap", FIXTURES / "out-of-reach-and-back.xml")
        gap = next(f for f in report["paths"][0]["findings"] if f["code"] == "out-of-reach")
        self.open(page)
        for chart in self.ask("charts.map((chart) => chart.file())"):
            inside = [row[1:] for row in chart if gap["begin_s"] + 1e-6 < row[0] < gap["end_s"] - 1e-6]
            self.assertTrue(inside)
            self.assertEqual({value for row in inside for value in row}, {None})
            outside = [row[1:] for row in chart if not gap["begin_s"] - 1e-6 < row[0] < gap["end_s"] + 1e-6]
            self.assertNotIn(None, {value for row in outside for value in row})

    def test_stands_still_while_it_dwells(self):
        page, report = write("dwell", FIXTURES / "tool-change-and-dwell.xml")
        segments = report["paths"][0]["segments"]
        rests = [(i, s["dwell_s"]) for i, s in enumerate(segments) if s["dwell_s"] > 0]
        self.assertTrue(rests)
        self.open(page)
        speeds = self.ask("charts[0].file()")
        for i, rest in rests:
            arrival = sum(s["duration_s"] + s["dwell_s"] for s in segments[:i]) + segments[i]["duration_s"]
            still = [row for row in speeds if set(row[1:]) == {0}]
            for time in (arrival, arrival + rest):
                self.assertTrue(any(abs(row[0] - time) < 1e-9 for row in still), f"at {time} s")

    def test_charts_hold_the_peaks_of_a_thinned_path(self):
        page, report = write("thinned", zigzag("thinned.xml", 8), options=("--step-mm", "0.01"))
        self.assertGreater(report["paths"][0]["totals"]["samples"], 150_000)
        self.open(page)
        self.check_peaks(report, 25000)
        # The worst of every segment too, not only of the path.
        for segment in report["paths"][0]["segments"]:
            worst = self.ask("current().worst.reduce((most, ratio, row) => "
                             f"current().segment[row] === {segment['index']} && ratio > most ? ratio : most, 0)")
            self.assertAlmostEqual(worst, segment["peak_ratio"], delta=SINGLE * segment["peak_ratio"])
        self.assertLess(page.stat().st_size, MOST_BYTES + LIBRARY_BYTES)
        took = self.ask("(() => { const begin = performance.now(); for (let i = 0; i < 20; ++i) { setCursor(i * 500); "
                        "charts.forEach((chart) => chart.cursor()); } return (performance.now() - begin) / 20; })()")
        self.assertLess(took, 100, "ms for one move of the cursor")

    # None, many, several paths, hostile names.

    def test_nothing_found(self):
        page, report = write("clear", FIXTURES / "clean-bracket-trim.xml")
        self.assertEqual(report["errors"] + report["warnings"], 0)
        self.open(page)
        self.assertIn("CLEAR", self.browser.find_element(By.ID, "verdict").text)
        self.assertIn("Nothing was found", self.browser.find_element(By.ID, "lists").text)
        self.assertFalse(self.browser.find_element(By.ID, "next").is_enabled())

    def test_hundreds_of_findings(self):
        page, report = write("many", zigzag("many.xml", 63))
        findings = report["paths"][0]["findings"]
        self.assertGreaterEqual(len(findings), 500)
        self.open(page)
        rows = lambda: self.ask("[...document.querySelectorAll('#lists tbody tr:not([hidden])')].map((r) => Number(r.dataset.index))")
        self.assertEqual(rows(), list(range(len(findings))))
        self.browser.find_element(By.CSS_SELECTOR, "[data-key=value] button").click()
        ratios = [findings[i].get("ratio") or abs(findings[i]["value"]) for i in rows()]
        self.assertEqual(ratios, sorted(ratios, reverse=True))
        self.assertEqual(self.browser.find_element(By.CSS_SELECTOR, "[data-key=value]").get_attribute("aria-sort"), "descending")
        self.browser.find_element(By.CSS_SELECTOR, "#lists input").send_keys("w17,")
        wanted = [f["index"] for f in findings if f["to"] == "w17"]
        self.assertEqual(sorted(rows()), wanted)
        self.assertTrue(wanted)
        self.assertLess(page.stat().st_size, MOST_BYTES + LIBRARY_BYTES)

    def test_several_paths(self):
        page, report = write("several", FIXTURES / "clean-bracket-trim.xml", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        self.assertIn("on 1 of 2 paths", self.browser.find_element(By.ID, "verdict").text)
        buttons = self.browser.find_elements(By.CSS_SELECTOR, "#paths tbody button")
        self.assertEqual([b.text for b in buttons], [p["name"] for p in report["paths"]])
        buttons[1].click()
        self.next_picture()
        self.assertEqual(len(self.browser.find_elements(By.CSS_SELECTOR, ".list:not([hidden]) .lead")),
                         len(report["paths"][1]["findings"]))

    def test_names_stay_names(self):
        evil = "&lt;/script>&lt;img src=x onerror=document.title='broken'>@DATA@ &amp;amp;"
        file = zigzag("evil.xml", 2, id_of=lambda i: f"{evil}{i}", name=evil)
        page, report = write("evil", file)
        self.open(page)
        self.assertNotEqual(self.ask("document.title"), "broken")
        self.assertEqual(self.ask("document.querySelector('h1').textContent"), report["paths"][0]["name"])
        self.assertIn(report["paths"][0]["findings"][0]["to"], self.ask("document.querySelector('#lists td:nth-child(5)').textContent"))
        self.assertEqual(self.ask("document.querySelectorAll('img').length"), 0)

    # For every reader.

    def test_keys_reach_everything(self):
        page, _ = write("keys", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        self.ask("document.body.focus()")
        seen, unmarked = set(), []
        for _ in range(200):
            ActionChains(self.browser).send_keys(Keys.TAB).perform()
            name, outline, label = self.ask("((e) => [[e.id, e.className, e.textContent.slice(0, 40)].join('|'), "
                                            "getComputedStyle(e).outlineStyle, e.getAttribute('aria-label') || e.textContent || e.labels?.[0]?.textContent])"
                                            "(document.activeElement)")
            if self.ask("document.activeElement === document.body"):
                break
            seen.add(name)
            if outline == "none" or not label:
                unmarked.append(name)
        self.assertEqual(unmarked, [])
        everything = self.ask("[...document.querySelectorAll('a[href],button,input,select,[tabindex=\"0\"]')]"
                              ".filter((e) => !e.disabled && e.offsetParent !== null && e.name !== 'domain')"
                              ".map((e) => [e.id, e.className, e.textContent.slice(0, 40)].join('|'))")
        self.assertEqual([name for name in everything if name not in seen], [])

    def test_keys_move_cursor_and_view(self):
        page, _ = write("moves", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        plot = self.browser.find_element(By.CLASS_NAME, "plot")
        plot.send_keys(Keys.ARROW_RIGHT * 3)
        self.assertEqual(self.ask("state.row"), 3)
        plot.send_keys("+")
        self.assertAlmostEqual(self.ask("state.window[1] - state.window[0]"), self.ask("current().extent('time')[1]") / 2, places=6)
        plot.send_keys("0n")
        self.assertEqual(self.ask("state.finding"), 0)
        before = self.ask("document.querySelector('#view svg').innerHTML")
        self.browser.find_element(By.ID, "view").send_keys(Keys.ARROW_LEFT)
        self.next_picture()
        self.assertNotEqual(self.ask("document.querySelector('#view svg').innerHTML"), before)
        slider = self.browser.find_element(By.ID, "cursor")
        row = self.ask("state.row")
        slider.send_keys(Keys.ARROW_RIGHT)
        self.assertEqual(self.ask("state.row"), row + 1)
        self.assertIn("aypoint", slider.get_attribute("aria-valuetext"))

    def test_length_instead_of_time(self):
        page, report = write("length", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        self.browser.find_element(By.CSS_SELECTOR, "[value=length]").click()
        self.next_picture()
        window = self.ask("charts[0].graph.xAxisRange()")
        self.assertAlmostEqual(window[1], report["paths"][0]["totals"]["length_mm"], places=3)
        self.ask("showFinding(0)")
        self.next_picture()
        first = report["paths"][0]["findings"][0]
        window = self.ask("charts[0].graph.xAxisRange()")
        self.assertLess(window[0], first["begin_mm"])
        self.assertGreater(window[1], first["end_mm"])

    def test_waypoint_and_line_at_the_cursor(self):
        page, report = write("place", FIXTURES / "out-of-reach-and-back.xml")
        self.open(page)
        words = lambda: self.browser.find_element(By.ID, "readout").text
        lines = (FIXTURES / "out-of-reach-and-back.xml").read_text().splitlines()
        first = 1 + next(i for i, line in enumerate(lines) if "<waypoint" in line)
        self.assertIn("Waypoint arc begin", words())
        self.assertIn(f"line {first} of the path file", words())
        self.ask("setCursor(current().rows - 1)")
        self.assertIn("Waypoint lift off", words())
        self.assertIn(f"line {report['paths'][0]['segments'][-1]['line']} of the path file", words())

    def test_contrast_in_light_and_dark(self):
        page, _ = write("contrast", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        pairs = [("ink", "paper"), ("ink", "sheet"), ("ink", "faint"), ("soft", "paper"), ("soft", "sheet"), ("soft", "faint"),
                 ("bad", "bad-back"), ("bad", "sheet"), ("doubt", "sheet"), ("doubt", "faint"), ("good", "good-back"),
                 ("good", "sheet"), ("accent", "sheet")]

        def luminance(text):
            parts = [int(text[i:i + 2], 16) / 255 for i in (1, 3, 5)]
            linear = [p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts]
            return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

        def contrast(a, b):
            high, low = sorted((luminance(a), luminance(b)), reverse=True)
            return (high + 0.05) / (low + 0.05)

        for theme in ("light", "dark"):
            self.browser.execute_script("setTheme(arguments[0])", theme)
            colours = self.ask("(names => Object.fromEntries(names.map((n) => [n, colour(n)])))(%s)" % json.dumps(
                sorted({name for pair in pairs for name in pair} | {f"s{i}" for i in range(8)} | {"slow", "brisk", "close", "over"})))
            for text, back in pairs:  # WCAG 2.1, 1.4.3
                self.assertGreaterEqual(contrast(colours[text], colours[back]), 4.5, f"{theme}: {text} on {back}")
            for line in [f"s{i}" for i in range(8)] + ["slow", "brisk", "close", "over"]:  # WCAG 2.1, 1.4.11
                self.assertGreaterEqual(contrast(colours[line], colours["sheet"]), 3, f"{theme}: {line}")

    def test_follows_the_systems_colours(self):
        page, _ = write("system", FIXTURES / "clean-bracket-trim.xml")
        self.open(page)
        papers = []
        for scheme in ("light", "dark"):
            self.browser.execute_cdp_cmd("Emulation.setEmulatedMedia",
                                         {"features": [{"name": "prefers-color-scheme", "value": scheme}]})
            papers.append(self.ask("colour('paper')"))
        self.browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"features": []})
        self.assertNotEqual(*papers)
        self.browser.find_element(By.ID, "theme").click()  # light
        self.browser.find_element(By.ID, "theme").click()  # dark
        self.assertEqual(self.ask("colour('paper')"), papers[1])

    def test_fits_a_phone_and_twice_the_size(self):
        page, _ = write("phone", FIXTURES / "out-of-reach-and-back.xml")
        for width in (320, 390, 650, 1300):
            self.open(page, width=width)
            self.assertLessEqual(self.ask("document.documentElement.scrollWidth"), width)
            self.ask("showFinding(3)")
            self.next_picture()
            self.assertLessEqual(self.ask("Math.max(...charts.map((c) => c.canvas.getBoundingClientRect().right))"), width)

    def test_prints_with_its_charts(self):
        page, report = write("print", FIXTURES / "out-of-reach-and-back.xml", FIXTURES / "wrist-miss-0.5-mm.xml")
        self.open(page)
        self.ask("window.dispatchEvent(new Event('beforeprint'))")
        drawn = self.ask("[...document.querySelectorAll('svg.paper g path')].map((p) => p.getAttribute('d').length)")
        self.assertEqual(len(drawn), self.ask("charts.reduce((sum, chart) => sum + chart.spec.series.length, 0)"))
        self.assertGreater(min(drawn), 20)
        self.browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": "print"})
        shown = self.ask("[...document.querySelectorAll('.list tbody tr')].filter((r) => r.getClientRects().length > 0).length")
        self.browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": ""})
        self.assertEqual(shown, sum(len(path["findings"]) for path in report["paths"]))  # those of every path
        self.ask("window.dispatchEvent(new Event('afterprint'))")
        self.assertEqual(self.ask("document.querySelectorAll('.paper').length"), 0)


if __name__ == "__main__":
    PROGRAM, FIXTURES = sys.argv[1], pathlib.Path(sys.argv[2]).resolve()
    unittest.main(argv=[sys.argv[0], *sys.argv[3:]])
