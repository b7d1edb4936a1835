"""What a person does on the board, in the words of the tests."""

import json
import time


def value_id(path, part="value"):
    return json.dumps({"path": path, "type": part}, separators=(",", ":"))


def box(page, path, part="value"):
    """The control of a study key."""
    return page.locator(f"[id='{value_id(path, part)}']")


def open_study(page, address, title="Gasket punch"):
    """Open a shipped study and wait for its pictures."""
    page.goto(address)
    page.locator(".studies button", has_text=title).first.click()
    page.wait_for_selector("#bench-picture svg")
    settled(page)


def until(page, expression, seconds=15.0):
    """Wait until an expression is true; asked from outside, since the board's policy allows no eval inside."""
    end = time.monotonic() + seconds
    while not page.evaluate(expression):
        assert time.monotonic() < end, f"still not true after {seconds} s: {expression}"
        time.sleep(0.02)


def settled(page):
    """Wait until nothing on the page lags behind the last change."""
    until(page, "!document.documentElement.classList.contains('stale') && !pullward.unheard.length && !pullward.held"
                " && pullward.drawn !== null && !pullward.drawn.more && !pullward.restTimer")


def shown(page, rating="served"):
    """The rating on the screen, as printed."""
    return page.locator(f"[data-rating={rating}] .number").inner_text()


def type_value(page, path, text):
    """Type a value into a control, leave it, and wait until the board has taken it up."""
    field = box(page, path)
    field.fill(text)
    field.press("Tab")
    until(page, f"String(pullward.known[{json.dumps(path)}]) === {json.dumps(text)}")


def show_section(page, name):
    """Open a section of the drawer."""
    section = page.locator(f"details[data-section={name}]")
    if section.get_attribute("open") is None:
        section.locator("summary").first.click()
