"""Pages to look at: of real answers, with hostile names, of several spectra; and a browser, where there is one."""

from __future__ import annotations

import os
import shutil
import time
from collections.abc import Callable, Iterator
from dataclasses import replace
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from ident.identification import Examination, examine
from ident.readers import read_spectrum
from ident.report.page import About, Page, read_about

from .parsed import Parsed, parse

ROOT = Path(__file__).resolve().parents[2]
DEMO = ROOT / "demo_spectra"
HOSTILE = "</script><img src=x onerror=alert(1)> & \"q\" '$title' \u202e\u2028{{x}}"
SEVERAL = ("slip_ring_dead.csv", "slip_ring_reference.csv", "terminal_windows.csv", "connector_pin_derivative.txt")
ABOUT = """
[report]
operator = "A. <b>Analyst</b>"
date = 2026-12-01
beam_current = "10 nA"
resolution = "0.5 %"
remark = "first line\\nsecond </script> line"

[analyst.copper]
decision = "accepted"

[[analyst.Ag]]
decision = "overruled"
remark = "silver <img src=x onerror=alert(2)> is the ring"
spectrum = "slip_ring_dead.csv"

[analyst.Pb]
remark = "asked for by the customer"

[[spot]]
name = "pit </text><script>alert(3)</script>"
x = 0.25
y = 0.5
spectrum = "slip_ring_dead.csv"
beam_current = "20 nA"
"""


@cache
def examined(name: str) -> Examination:
    """Examine one of the demo files."""
    return examine(read_spectrum(DEMO / name))


def hostile() -> Examination:
    """An answer whose every text from outside would act, if it could."""
    found = examined("slip_ring_dead.csv")
    header = {**found.answer.header, "sample": HOSTILE, "operator": HOSTILE, "comments": (HOSTILE,)}
    answer = replace(found.answer, spectrum=f"{HOSTILE}.csv", header=header, warnings=(HOSTILE,), cautions=(HOSTILE,))
    return replace(found, answer=answer)


@pytest.fixture(scope="session")
def about(tmp_path_factory: pytest.TempPathFactory) -> About:
    """What an analyst adds."""
    path = tmp_path_factory.mktemp("about") / "about.toml"
    path.write_text(ABOUT, encoding="utf-8")
    return read_about(path)


def written(path: Path, examinations: list[Examination], **settings: Any) -> Path:
    """Write a page of some answers."""
    page = Page(**settings)
    for examination in examinations:
        page.add(examination)
    page.write(path)
    return path


@pytest.fixture(scope="session")
def single(tmp_path_factory: pytest.TempPathFactory, about: About) -> Path:
    """A page of one spectrum."""
    folder = tmp_path_factory.mktemp("single")
    inputs = ["slip_ring_dead.csv"]
    command = "ident assign --page report.html slip_ring_dead.csv"
    return written(
        folder / "page.html",
        [examined("slip_ring_dead.csv")],
        about=about,
        inputs=inputs,
        command=command,
        reading={"kind": "auto", "within": None},
    )


@pytest.fixture(scope="session")
def several(tmp_path_factory: pytest.TempPathFactory, about: About) -> Path:
    """A page of several spectra: direct and differential, whole and in windows."""
    folder = tmp_path_factory.mktemp("several")
    return written(folder / "page.html", [examined(name) for name in SEVERAL], about=about, inputs=SEVERAL)


@pytest.fixture(scope="session")
def nasty(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A page full of hostile names, of two spectra so that the summary is there too."""
    folder = tmp_path_factory.mktemp("nasty")
    return written(folder / "page.html", [hostile(), hostile()], command=f"ident assign '{HOSTILE}'", inputs=[HOSTILE])


@pytest.fixture(scope="session")
def parsed(single: Path, several: Path, nasty: Path) -> dict[str, Parsed]:
    """The three pages as the standard library's parser reads them."""
    return {path.parent.name.rstrip("0123456789"): parse(path) for path in (single, several, nasty)}


def _programs() -> tuple[str, str] | None:
    browsers = (shutil.which(name) for name in ("chromium", "chromium-browser", "google-chrome", "chrome"))
    browser, driver = next((found for found in browsers if found), None), shutil.which("chromedriver")
    return (browser, driver) if browser and driver else None


@pytest.fixture(scope="session")
def chromium() -> Iterator[Any]:
    """A headless Chromium; without one, these tests are skipped, or fail where IDENT_NEED_BROWSER is set."""
    programs = _programs()
    if programs is None:
        said = "no Chromium with its driver: install chromium and chromium-driver"
        if os.environ.get("IDENT_NEED_BROWSER") == "1":
            pytest.fail(said)
        pytest.skip(said)
    from selenium.webdriver import Chrome
    from selenium.webdriver.chrome.options import Options
    from selenium.webdriver.chrome.service import Service

    options = Options()
    options.binary_location = programs[0]
    words = ["--headless=new", "--disable-gpu", "--disable-dev-shm-usage", "--window-size=1360,1000", "--lang=en-GB"]
    if os.geteuid() == 0:
        words.append("--no-sandbox")  # Chromium refuses to start as root with one
    for word in words:
        options.add_argument(word)
    options.set_capability("goog:loggingPrefs", {"browser": "ALL", "performance": "ALL"})
    driver = Chrome(options=options, service=Service(programs[1]))
    try:
        yield driver
    finally:
        driver.quit()


@pytest.fixture
def shown(chromium: Any) -> Callable[[Path], Any]:
    """Open a page and wait until its plot is there; the logs of whatever was open before are thrown away."""

    def show(path: Path) -> Any:
        chromium.get("about:blank")
        for log in ("browser", "performance"):
            chromium.get_log(log)
        chromium.get(path.as_uri())
        until(lambda: chromium.execute_script("return document.documentElement.dataset.ready === 'yes'"))
        return chromium

    return show


def until(happens: Callable[[], Any], seconds: float = 20.0) -> Any:
    """Wait until something is true, and give it; however slow the machine is, it does not take this long."""
    end = time.monotonic() + seconds
    while time.monotonic() < end:
        found = happens()
        if found:
            return found
        time.sleep(0.05)
    raise AssertionError("it did not happen in time")
