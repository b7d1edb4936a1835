"""Everybody can use it: axe-core on every page in both themes, the keyboard alone, a narrow screen, paper."""

import importlib.util
from pathlib import Path

import pytest

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)

pytestmark = pytest.mark.browser
AXE = Path(__file__).with_name("vendor") / "axe.min.js"
PAGES = ("Open", "Bench", "Who is left out", "Let-go", "Placements tried", "Search", "Sources", "Take away")
READY = {
    "Open": ".studies", "Bench": "#bench-picture svg", "Who is left out": "[data-change]", "Let-go": "[data-change]",
    "Placements tried": "#keep", "Search": "#sweep", "Sources": "[data-change]", "Take away": "#export-says",
}  # fmt: skip


def faults(page):
    """Return what axe-core finds, every impact, with the first place of each."""
    page.evaluate(AXE.read_text(encoding="utf-8"))
    found = page.evaluate("async () => (await axe.run(document, {resultTypes: ['violations']})).violations")
    return [(v["id"], v["impact"], v["nodes"][0]["html"][:160], v["nodes"][0].get("failureSummary", "")[:200]) for v in found]


@pytest.mark.parametrize("theme", ["light", "dark"])
def test_axe_finds_nothing_on_any_page(board, new_page, theme):
    page = new_page(theme=theme)
    steps.open_study(page, board.address)
    page.locator("#keep-now").click()
    page.locator("#state-line", has_text="kept as").wait_for()
    found = {}
    for name in PAGES:
        page.get_by_role("navigation").get_by_role("link", name=name, exact=True).click()
        page.locator(READY[name]).first.wait_for(state="attached")
        if name == "Bench":
            steps.settled(page)
            for section in ("operators", "linkage", "zones", "targets", "variants"):
                steps.show_section(page, section)
            page.locator("details.rating summary").first.click()
        if faults_here := faults(page):
            found[name] = faults_here
    assert found == {}


def test_axe_finds_nothing_beside_an_invalid_field_and_in_space(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    steps.type_value(page, "lever.length_mm", "9000")
    page.locator("text=is outside its range").first.wait_for()
    assert faults(page) == []
    page.locator("#undo").click()
    steps.settled(page)
    page.get_by_role("button", name="In space").click()
    page.locator("#space-graph canvas").first.wait_for()
    assert faults(page) == []


def tab_to(page, selector, most=120):
    """Press Tab until the focus is on what the selector names."""
    for _ in range(most):
        page.keyboard.press("Tab")
        if page.evaluate("s => document.activeElement.matches(s)", selector):
            return
    raise AssertionError(f"Tab never reached {selector}")


def test_the_main_task_by_keyboard_alone(board, new_page):
    page = new_page()
    page.goto(board.address)
    page.locator(".studies button").first.wait_for()
    tab_to(page, ".studies button")
    page.keyboard.press("Enter")
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    title = page.locator("#study-title").inner_text()
    tab_to(page, f"[id='{steps.value_id('lever.length_mm')}']")
    before = steps.shown(page)
    page.keyboard.press("Control+a")
    page.keyboard.type("444")
    page.keyboard.press("Tab")
    steps.until(page, "pullward.known['lever.length_mm'] === 444")
    steps.settled(page)
    assert steps.shown(page) == "94.4" != before
    assert page.evaluate("document.activeElement.getAttribute('role')") == "slider"
    page.keyboard.press("ArrowRight")
    steps.until(page, "pullward.known['lever.length_mm'] === 445")
    steps.settled(page)
    assert steps.shown(page) == "94.5"
    tab_to(page, "#chart-picture")
    told = page.locator("#pointer-says").inner_text()
    page.keyboard.press("ArrowRight")
    assert page.locator("#pointer-says").inner_text() != told
    outline = page.evaluate("getComputedStyle(document.activeElement).outlineStyle")
    assert outline == "solid"
    page.evaluate("document.activeElement.blur()")
    page.keyboard.press("Control+z")
    steps.until(page, "pullward.known['lever.length_mm'] !== 445")
    steps.settled(page)
    assert page.locator("#study-title").inner_text() == title


@pytest.mark.parametrize("theme", ["light", "dark"])
def test_focus_is_seen_on_fields_buttons_and_links(board, new_page, theme):
    page = new_page(theme=theme)
    steps.open_study(page, board.address)
    unseen = []
    for _ in range(45):
        page.keyboard.press("Tab")
        seen = page.evaluate(
            """() => {
              const e = document.activeElement, s = getComputedStyle(e);
              if (e === document.body) return ['', true];
              const near = getComputedStyle(e.parentElement);
              return [e.outerHTML.slice(0, 100), s.outlineStyle !== 'none' && parseFloat(s.outlineWidth) >= 1
                || near.outlineStyle !== 'none'];
            }"""
        )
        if not seen[1]:
            unseen.append(seen[0])
    assert unseen == []


def test_a_narrow_screen_stacks_drawing_ratings_chart_values(board, new_page):
    page = new_page(width=390, height=844)
    steps.open_study(page, board.address)
    tops = [page.locator(s).bounding_box()["y"] for s in (".picture", "#ratings", ".stroke", ".drawer")]
    assert tops == sorted(tops)
    assert page.evaluate("document.documentElement.scrollWidth") <= 390
    small = page.evaluate(
        """[...document.querySelectorAll('#bench-picture text, #chart-picture text')]
             .filter(t => t.getBoundingClientRect().height > 0 && t.getBoundingClientRect().height < 8).length"""
    )
    assert small == 0
    for name in PAGES[2:]:
        page.get_by_role("navigation").get_by_role("link", name=name, exact=True).click()
        page.locator(READY[name]).first.wait_for(state="attached")
        steps.until(page, "!document.querySelector('.waiting')")
        assert page.evaluate("document.documentElement.scrollWidth") <= 390, name


def test_on_paper_there_are_no_tools_and_dark_is_light(board, new_page):
    page = new_page(theme="dark")
    steps.open_study(page, board.address)
    page.emulate_media(media="print")
    for selector in (".tools", ".pages", ".drawer", ".views"):
        assert not page.locator(selector).is_visible(), selector
    assert page.evaluate("getComputedStyle(document.documentElement).getPropertyValue('--paper').trim()") == "#ffffff"
    assert page.locator(".foot", has_text="no risk assessment").is_visible()
    pdf = page.pdf(format="A4")
    assert pdf.startswith(b"%PDF")


def test_the_caution_is_on_every_page(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    for name in PAGES:
        page.get_by_role("navigation").get_by_role("link", name=name, exact=True).click()
        page.locator(READY[name]).first.wait_for(state="attached")
        assert "no risk assessment" in page.locator(".foot").inner_text(), name
        assert page.locator("text=Share chart").count() == 0, name


def test_the_first_load_is_light(board, new_page):
    """All that a browser fetches before the main page stands, gzipped, plotly itself aside: under 1.5 MB."""
    import gzip

    page = new_page()
    sizes = {}
    page.on("response", lambda r: sizes.update({r.url: len(gzip.compress(r.body()))}) if r.status == 200 else None)
    steps.open_study(page, board.address)
    assert not any("plotly.min" in url for url in sizes)
    assert sum(size for url, size in sizes.items() if "plotly" not in url) < 1_500_000
