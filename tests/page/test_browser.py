"""The page in a browser: it loads alone, answers pointer and keys, and shows hostile names as text.

Skipped, with the reason, where there is no Chromium with its driver; failing there when IDENT_NEED_BROWSER is 1.
"""

from __future__ import annotations

import itertools
import json
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from ident.report.palette import MARKS

from .conftest import HOSTILE, SEVERAL, examined, until, written

Show = Callable[[Path], Any]
MODEL = "const model = (name) => Bokeh.documents[0].get_model_by_name(name);"
RANGE = MODEL + "const r = model('differential').x_range; return [r.start, r.end];"
PLACE_OF = (
    MODEL
    + """
const panel = model('differential'), box = document.querySelector('#plot-host').getBoundingClientRect();
const from = panel.x_range.start, to = panel.x_range.end, left = box.width - panel.inner_width - 12;
return [box.left + left + (arguments[0] - from) / (to - from) * panel.inner_width, box.top + 150];
"""
)  # 12 pixels lie to the right of every panel


def problems(browser: Any) -> list[str]:
    """What the console complained of."""
    return [entry["message"] for entry in browser.get_log("browser") if entry["level"] not in ("INFO", "DEBUG")]


def requests(browser: Any) -> set[str]:
    """Schemes of all that was asked for."""
    told = (json.loads(entry["message"])["message"] for entry in browser.get_log("performance"))
    sent = ("Network.requestWillBeSent", "Network.webSocketCreated")
    return {(m["params"].get("request") or m["params"])["url"].partition(":")[0] for m in told if m["method"] in sent}


def point_at(browser: Any, energy_ev: float) -> None:
    """Move the pointer to an energy of the differential panel."""
    from selenium.webdriver.common.actions.action_builder import ActionBuilder

    browser.execute_script("document.getElementById('plot').scrollIntoView()")
    x, y = browser.execute_script(PLACE_OF, energy_ev)
    for off in (6, 0):  # the pointer comes from somewhere
        action = ActionBuilder(browser)
        action.pointer_action.move_to_location(int(x) + off, int(y) + off)
        action.perform()


def press(browser: Any, *keys: str) -> None:
    from selenium.webdriver import ActionChains

    chain = ActionChains(browser)
    for key in keys:
        chain.send_keys(key)
    chain.perform()


def settle(browser: Any) -> None:
    """Wait until what was asked for is drawn: two frames later."""
    browser.execute_async_script("requestAnimationFrame(() => requestAnimationFrame(arguments[0]))")


def focused(browser: Any) -> str:
    said: str = browser.execute_script("const e = document.activeElement; return e.id || e.textContent.trim();")
    return said


def column(browser: Any, name: str, key: str) -> np.ndarray:
    """A column of what is drawn; NaN where there is nothing."""
    told = browser.execute_script(
        MODEL + "return Array.from(model(arguments[0]).data[arguments[1]], (v) => Number.isNaN(v) ? null : v);",
        name,
        key,
    )
    return np.array([np.nan if value is None else value for value in told], dtype=float)


@pytest.mark.parametrize("page", ["single", "several", "nasty"])
def test_it_loads_without_complaint_and_without_the_network(
    page: str, shown: Show, request: pytest.FixtureRequest
) -> None:
    browser = shown(request.getfixturevalue(page))
    assert not problems(browser)
    assert requests(browser) <= {"file", "data"}
    assert browser.execute_script("return document.querySelectorAll('#plot-host canvas, #plot-host > div').length") > 0


def test_the_policy_holds_in_the_browser(shown: Show, single: Path) -> None:
    """Even a script that came in may not speak to anybody, nor run from text."""
    browser = shown(single)
    failed = browser.execute_async_script(
        "const done = arguments[0]; fetch('https://example.org/').then(() => done('reached'), () => done('refused'));"
    )
    assert failed == "refused"
    browser.execute_script(
        "const s = document.createElement('script'); s.textContent = 'window.ran = 1'; document.body.append(s);"
    )
    assert browser.execute_script("return window.ran") is None


def test_the_measured_curve_is_drawn_whole(shown: Show, single: Path) -> None:
    browser = shown(single)
    (differential,) = examined(SEVERAL[0]).analysis.differentials
    energies = column(browser, "measured", "x")
    assert np.allclose(energies[np.isfinite(energies)], differential.energy_ev)
    assert np.isfinite(column(browser, "measured", "y")).sum() == differential.energy_ev.size


def test_pointing_at_a_minimum_says_who_claims_it_and_why(shown: Show, single: Path) -> None:
    browser = shown(single)
    answer = examined(SEVERAL[0]).answer
    copper = next(a for a in answer.assignments if a.element == "Cu")
    line = next(line for line in copper.lines if line.status == "met")
    point_at(browser, line.found_ev)
    tip = browser.find_element("id", "tip")
    until(tip.is_displayed)
    assert f"Cu {line.transition}" in tip.text
    assert f"{line.found_ev:.1f} eV" in tip.text
    assert next(r.text for r in copper.reasons if r.side == "for")[:40] in tip.text
    gap = max(
        np.arange(540.0, 740.0), key=lambda ev: min(abs(ev - m.energy_ev) for m in examined(SEVERAL[0]).analysis.minima)
    )
    point_at(browser, gap)
    until(lambda: not tip.is_displayed())


@pytest.mark.parametrize("element", ["Cu", "B"])
def test_choosing_an_element_shows_its_whole_pattern(element: str, shown: Show, single: Path) -> None:
    browser = shown(single)
    found = examined(SEVERAL[0])
    before = column(browser, "rest", "y")
    assert column(browser, "chosen", "x").size == 0
    button = browser.find_element("css selector", f'.choice[data-element="{element}"]')
    button.click()
    assert button.get_attribute("aria-pressed") == "true"
    energies, values = column(browser, "chosen", "x"), column(browser, "chosen", "y")
    assignment = next(a for a in found.answer.assignments if a.element == element)
    (low, high), *_ = found.answer.ranges_ev
    inside = [x for x in assignment.lines if low + 5 < x.expected_ev < high - 5 and x.relative_height >= 0.1]
    assert inside
    for line in inside:  # a predicted line is deepest where it is expected, within its own width
        near = np.abs(energies - line.expected_ev) < 6.0
        assert np.nanmin(values[near]) < 0
    readout = until(lambda: browser.find_element("id", "readout").text)
    assert all(line.transition in readout for line in inside[:3])
    called = element in found.answer.called
    changed = np.nanmax(np.abs(column(browser, "rest", "y") - before)) > 0
    assert changed is not called  # what is called is in the residual anyhow; a possible one changes it
    button.click()
    assert column(browser, "chosen", "x").size == 0


def test_residual_is_measured_less_predicted(shown: Show, single: Path) -> None:
    browser = shown(single)
    measured, together = column(browser, "measured", "y"), column(browser, "together", "y")
    rest = column(browser, "rest", "y")
    wanted = measured - np.nan_to_num(together)
    assert np.allclose(rest, wanted, equal_nan=True, atol=1e-9 * np.nanmax(np.abs(measured)))


def test_marks_have_their_shapes(shown: Show, single: Path) -> None:
    browser = shown(single)
    drawn = browser.execute_script(MODEL + "const d = model('marks').data; return [d.edge, d.marker, d.x];")
    shapes = {mark.colour: mark.shape for mark in MARKS.values()}
    known = {"disc": "circle", "ring": "circle", "diamond": "diamond", "cross": "x", "square": "square"}
    assert len(drawn[2]) == len(examined(SEVERAL[0]).analysis.minima)
    for colour, marker, _ in zip(*drawn, strict=True):
        assert marker == (known[shapes[colour]] if colour in shapes else "dot")


def test_labels_do_not_lie_on_each_other(shown: Show, single: Path) -> None:
    browser = shown(single)
    for action in ("whole", "in", "in"):
        browser.find_element("css selector", f"[data-do={action}]").click()
        settle(browser)
        low, high = browser.execute_script(RANGE)
        width = browser.execute_script(MODEL + "return model('differential').inner_width;")
        places, texts = browser.execute_script(MODEL + "const d = model('labels').data; return [d.x, d.text];")
        extents = sorted(
            ((x - low) / (high - low) * width, 13.0 * len(text.split("\n")))
            for x, text in zip(places, texts, strict=True)
        )  # 12 pixels a line of writing, with a little between
        for (before, wide), (after, next_wide) in itertools.pairwise(extents):
            assert after - before >= 0.5 * (wide + next_wide)


def test_buttons_zoom_and_pan(shown: Show, single: Path) -> None:
    browser = shown(single)
    whole = browser.execute_script(RANGE)
    browser.find_element("css selector", "[data-do=in]").click()
    closer = browser.execute_script(RANGE)
    assert whole[0] < closer[0] < closer[1] < whole[1]
    browser.find_element("css selector", "[data-do=right]").click()
    moved = browser.execute_script(RANGE)
    assert moved[0] > closer[0]
    assert moved[1] - moved[0] == pytest.approx(closer[1] - closer[0])
    browser.find_element("css selector", "[data-do=whole]").click()
    assert browser.execute_script(RANGE) == whole


def test_dragging_moves_the_spectrum_or_zooms(shown: Show, single: Path) -> None:
    from selenium.webdriver.common.actions.action_builder import ActionBuilder

    browser = shown(single)

    def drag_left() -> list[float]:
        browser.execute_script("document.getElementById('plot').scrollIntoView()")
        x, y = browser.execute_script(PLACE_OF, 600.0)
        action = ActionBuilder(browser)
        pointer = action.pointer_action
        pointer.move_to_location(int(x), int(y)).pointer_down()
        for step in range(1, 6):
            pointer.move_to_location(int(x) - 30 * step, int(y))
        pointer.pointer_up()
        action.perform()
        found: list[float] = browser.execute_script(RANGE)
        return found

    browser.find_element("css selector", "[data-do=in]").click()
    before = browser.execute_script(RANGE)
    after = drag_left()
    assert after[0] > before[0]
    assert after[1] - after[0] == pytest.approx(before[1] - before[0], rel=1e-6)
    browser.find_element("css selector", "[data-do=whole]").click()
    browser.find_element("css selector", "[data-do=drag]").click()
    zoomed = drag_left()
    assert zoomed[1] - zoomed[0] < 0.5 * (after[1] - after[0])


def test_everything_works_with_the_keyboard(shown: Show, single: Path) -> None:
    """WCAG 2.2, 2.1.1: reached with Tab, worked with keys, left again with Tab."""
    from selenium.webdriver.common.keys import Keys

    browser = shown(single)
    for _ in range(80):
        press(browser, Keys.TAB)
        if focused(browser).startswith("O"):
            break
    press(browser, Keys.SPACE)
    assert browser.execute_script("return document.activeElement.getAttribute('aria-pressed')") == "true"
    assert np.isfinite(column(browser, "chosen", "y")).any()
    for _ in range(80):
        press(browser, Keys.TAB)
        if focused(browser) == "plot":
            break
    outline = browser.execute_script("return getComputedStyle(document.activeElement).outlineStyle")
    assert outline == "solid"  # 2.4.7: where the focus is can be seen
    whole = browser.execute_script(RANGE)
    press(browser, "+", "+")
    assert browser.execute_script(RANGE)[1] - browser.execute_script(RANGE)[0] < whole[1] - whole[0]
    press(browser, "0")
    assert browser.execute_script(RANGE) == whole
    minima = examined(SEVERAL[0]).analysis.minima
    press(browser, "n")
    assert f"{minima[0].energy_ev:.1f} eV" in browser.find_element("id", "readout").text
    press(browser, "n", "n", "p")
    assert f"{minima[1].energy_ev:.1f} eV" in browser.find_element("id", "readout").text
    press(browser, Keys.TAB)
    assert focused(browser) != "plot"  # 2.1.2: no trap
    summary = browser.find_element("css selector", "details summary")
    summary.send_keys(Keys.ENTER)
    assert browser.execute_script("return document.querySelector('details').open")


def test_a_minimum_of_the_table_is_shown_in_the_plot(shown: Show, single: Path) -> None:
    browser = shown(single)
    button = browser.find_elements("css selector", ".go")[-1]
    energy = float(button.text)
    browser.execute_script("arguments[0].scrollIntoView()", button)
    button.click()
    low, high = browser.execute_script(RANGE)
    assert low < energy < high
    assert high - low < 300
    assert column(browser, "cursor differential", "x")[0] == pytest.approx(energy, abs=0.06)


def test_a_cell_of_the_summary_opens_its_spectrum(shown: Show, several: Path) -> None:
    browser = shown(several)
    articles = browser.find_elements("tag name", "article")
    assert [a.is_displayed() for a in articles] == [True, False, False, False]
    link = browser.find_element("css selector", '.matrix a[href="#s3-Ni"]')  # the dull pin is plated with nickel
    browser.execute_script("arguments[0].scrollIntoView({block: 'center', inline: 'center'})", link)
    link.click()
    until(articles[3].is_displayed)
    assert not articles[0].is_displayed()
    chosen = articles[3].find_element("css selector", '.choice[aria-pressed="true"]')
    assert chosen.get_attribute("data-element") == "Ni"
    assert np.isfinite(column(browser, "chosen", "y")).any()
    visible = browser.execute_script(MODEL + "return [model('direct').visible, model('direct-log').visible];")
    assert visible == [False, False]  # recorded as a derivative
    browser.execute_script("location.hash = '#s2'")
    until(articles[2].is_displayed)
    windows = examined(SEVERAL[2]).answer.ranges_ev
    assert len(browser.find_elements("css selector", ".windows button")) == len(windows)
    browser.find_elements("css selector", ".windows button")[1].click()
    low, high = browser.execute_script(RANGE)
    assert low < windows[1][0] < windows[1][1] < high
    assert high < windows[2][0]
    assert not problems(browser)


def test_hostile_names_are_text_and_nothing_else(shown: Show, nasty: Path) -> None:
    browser = shown(nasty)
    for part in (".choice", ".go", "summary"):
        for found in browser.find_elements("css selector", part)[:3]:
            browser.execute_script("arguments[0].click()", found)
    point_at(browser, examined(SEVERAL[0]).analysis.minima[3].energy_ev)
    assert not problems(browser)
    assert browser.execute_script("return document.querySelectorAll('[onerror], [onload]').length") == 0
    head = browser.find_element("css selector", "article:not([hidden]) h2").text
    assert head.startswith(HOSTILE[:40])


def test_on_paper_everything_is_open_and_controls_are_gone(shown: Show, single: Path) -> None:
    browser = shown(single)
    browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": "print"})
    try:
        browser.execute_script("window.dispatchEvent(new Event('beforeprint'))")
        assert browser.execute_script("return document.querySelectorAll('details:not([open])').length") == 0
        hidden = browser.execute_script(
            "return ['.tools', '#tip', '#readout', '#viewer', '.skip', '.choice.none'].map("
            "(s) => document.querySelector(s).getClientRects().length)"
        )
        assert hidden == [0] * 6
        assert browser.find_element("css selector", "img.printed").is_displayed()
        browser.execute_script("window.dispatchEvent(new Event('afterprint'))")
        assert browser.execute_script("return document.querySelectorAll('details[open]').length") == 0
    finally:
        browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": ""})


@pytest.mark.parametrize("width", [360, 800, 1600])
def test_it_is_as_wide_as_the_window(width: int, shown: Show, several: Path) -> None:
    """WCAG 2.2, 1.4.10: no scrolling to the side, but for tables in boxes of their own."""
    browser = shown(several)
    size = {"width": width, "height": 900, "deviceScaleFactor": 1, "mobile": False}
    browser.execute_cdp_cmd("Emulation.setDeviceMetricsOverride", size)
    try:
        # a window drawn smaller by hand says so many times over; the emulated one says it once, perhaps too early
        narrow = "dispatchEvent(new Event('resize')); return document.documentElement.scrollWidth <= window.innerWidth"
        until(lambda: browser.execute_script(narrow))
        label = browser.execute_script(MODEL + "return model('differential').inner_width;")
        assert label < width
    finally:
        browser.execute_cdp_cmd("Emulation.clearDeviceMetricsOverride", {})


def test_a_long_path_does_not_make_it_wider(shown: Show, tmp_path: Path) -> None:
    found = examined("slip_ring_dead.csv")
    name = f"/{'folder_' * 12}/{'part' * 20}.csv"
    answer = replace(found.answer, spectrum=name)
    path = written(
        tmp_path / "long.html", [replace(found, answer=answer)], command=f"ident assign {name}", inputs=[name]
    )
    browser = shown(path)
    size = {"width": 360, "height": 900, "deviceScaleFactor": 1, "mobile": False}
    browser.execute_cdp_cmd("Emulation.setDeviceMetricsOverride", size)
    try:
        narrow = "dispatchEvent(new Event('resize')); return document.documentElement.scrollWidth <= window.innerWidth"
        until(lambda: browser.execute_script(narrow))
    finally:
        browser.execute_cdp_cmd("Emulation.clearDeviceMetricsOverride", {})


def test_without_scripts_the_figure_and_all_spectra_are_there(chromium: Any, several: Path) -> None:
    chromium.execute_cdp_cmd("Emulation.setScriptExecutionDisabled", {"value": True})
    try:
        chromium.get(several.as_uri())
        assert all(a.is_displayed() for a in chromium.find_elements("tag name", "article"))
        assert all(i.is_displayed() for i in chromium.find_elements("css selector", "img.printed"))
        assert not chromium.find_element("id", "viewer").is_displayed()
    finally:
        chromium.execute_cdp_cmd("Emulation.setScriptExecutionDisabled", {"value": False})
