"""The page in a real browser: no network, no errors, no sideways scrolling, light and dark."""

import os
import shutil

import pytest

from reconcile.report import write_report

pytestmark = pytest.mark.browser
CHROMIUM = next(filter(None, map(shutil.which, ("chromium", "chromium-browser", "google-chrome"))), None)


@pytest.fixture(scope="module")
def browser():
    if CHROMIUM is None:
        told = "no Chromium found; on Debian: apt-get install chromium"
        if os.environ.get("CI") == "true":
            pytest.fail(told)
        pytest.skip(told)
    from playwright.sync_api import sync_playwright

    with sync_playwright() as playwright:
        started = playwright.chromium.launch(executable_path=CHROMIUM, args=["--no-sandbox"])
        yield started
        started.close()


@pytest.fixture
def address(invented, tmp_path):
    write_report(invented, tmp_path / "report", ["page"])
    return (tmp_path / "report" / "index.html").as_uri()


@pytest.mark.parametrize("width", [400, 768, 1280, 1600])
@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_the_page_opens_quietly_and_fits(browser, address, width, scheme):
    page = browser.new_page(viewport={"width": width, "height": 900}, color_scheme=scheme)
    asked, said = [], []
    page.on("request", lambda request: asked.append(request.url))
    page.on("console", lambda message: said.append(message.text))
    page.on("pageerror", lambda error: said.append(str(error)))
    page.goto(address)
    for summary in page.locator("summary").all():
        summary.click()
    assert page.evaluate("document.documentElement.scrollWidth") <= width
    assert [url for url in asked if url != address and not url.startswith("data:")] == []
    assert said == []
    page.close()


def luminance(colour):
    parts = [int(p) / 255 for p in colour.removeprefix("rgb(").removesuffix(")").split(",")]
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_text_stands_out_from_the_paper(browser, address, scheme):
    "Contrast of 4.5 and more: WCAG 2.1, 1.4.3 (from memory)."
    page = browser.new_page(color_scheme=scheme)
    page.goto(address)
    paper = luminance(page.evaluate("getComputedStyle(document.body).backgroundColor"))
    for where in ("body", ".note", "thead th", "nav a", "header p", ".facts dt"):
        ink = luminance(page.evaluate("where => getComputedStyle(document.querySelector(where)).color", where))
        assert (max(ink, paper) + 0.05) / (min(ink, paper) + 0.05) >= 4.5, where
    page.close()


def test_the_contents_lead_to_their_sections(browser, address):
    page = browser.new_page()
    page.goto(address)
    for link in page.locator("nav a").all():
        target = link.get_attribute("href")
        link.click()
        assert page.evaluate("location.hash") == target
        assert page.locator(target).count() == 1
    page.close()


def test_print_shows_what_is_folded_on_the_screen(browser, address):
    page = browser.new_page()
    page.goto(address)
    visible = "[...document.querySelectorAll('details table')].map(table => table.checkVisibility())"
    assert set(page.evaluate(visible)) == {False}
    page.emulate_media(media="print")
    assert set(page.evaluate(visible)) == {True}
    page.close()


def test_nothing_that_was_typed_runs(browser, invented, tmp_path):
    invented.campaign.title = "<img src=x onerror=\"document.title='run'\"><script>document.title='run'</script>"
    write_report(invented, tmp_path / "hostile", ["page"])
    page = browser.new_page()
    page.goto((tmp_path / "hostile" / "index.html").as_uri())
    assert page.title() != "run"
    assert page.locator("img, script").count() == 0
    page.close()
