"""A cell in a real browser: sent when it is left, kept when it cannot be sent, asked for a reason.

The pages and scripts are the real ones; the answers are those a sheet may give.
"""

import json
from pathlib import Path
from urllib.parse import parse_qs, urlsplit

import pytest
from django.contrib.staticfiles import finders
from django.template import Context, Template

playwright = pytest.importorskip("playwright.sync_api", reason="playwright is not installed")
CHROMIUM = Path("/usr/bin/chromium")
pytestmark = [
    pytest.mark.browser,
    pytest.mark.skipif(not CHROMIUM.exists(), reason="no chromium on this machine"),
]

SITE = "http://lab.test"
ROW = (
    '<tr><td>{% include "components/_cell.html" with id="start" name="start" value="0.00" url="/start" %}'
    "</td>"
    '<td>{% include "components/_cell.html" with id="end" name="end" value="10.00" url="/end" %}</td></tr>'
)
SHEET = (
    '<!doctype html><html><body data-person="4" data-token="t"><table class="readings" data-cells>' + ROW + "</table>"
    '<p data-unsent hidden></p><script type="module" src="/static/js/keys.js"></script>'
    '<script type="module" src="/static/js/autosave.js"></script>'
    '<script type="module" src="/static/js/leave.js"></script></body></html>'
)


# what is fulfilled by the test itself would arrive without a network too
OFFLINE = """() => {
  const real = window.fetch;
  window.fetch = (...all) => navigator.onLine ? real(...all) : Promise.reject();
}"""


def answer(text, *, reason):
    """Status, type and body for a typed value: what a sheet's views may say."""
    if not text.replace(",", "").replace(".", "").isdigit():
        return (
            400,
            "application/json",
            json.dumps({"reasons": [f'End is "{text}": a number in mL is expected.']}),
        )
    if text == "11.00" and not reason:
        fragment = Template('{% include "components/_reason.html" with id="end" %}').render(Context())
        return 428, "text/html", fragment
    if text == "33.00":
        remark = "End is 33.00 mL, more than 50 % away from the usual."
        return 200, "application/json", json.dumps({"saved": "09:42:16", "remark": remark})
    return 200, "application/json", json.dumps({"value": text.replace(",", "."), "saved": "09:42:16"})


def serve(route, received):
    request = route.request
    where = urlsplit(request.url).path
    if where.startswith("/static/"):
        route.fulfill(path=finders.find(where.removeprefix("/static/")))
    elif request.method == "POST":
        body = {name: values[0] for name, values in parse_qs(request.post_data).items()}
        received.append(body)
        status, kind, text = answer(body[where[1:]], reason=body.get("reason"))
        route.fulfill(status=status, content_type=kind, body=text)
    else:
        route.fulfill(content_type="text/html", body=Template(SHEET).render(Context()))


@pytest.fixture(scope="module")
def browser():
    with playwright.sync_playwright() as engine:
        options = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run"]
        browser = engine.chromium.launch(executable_path=str(CHROMIUM), args=options)
        yield browser
        browser.close()


@pytest.fixture
def sheet(browser):
    context = browser.new_context()
    received = []
    context.route("**/*", lambda route: serve(route, received))
    page = context.new_page()
    page.goto(f"{SITE}/sheet")
    page.received = received
    yield page
    context.close()


def type_in(page, cell, text):
    page.fill(f"#{cell}", text)
    page.press(f"#{cell}", "Enter")


def expect_text(page, place, text):
    playwright.expect(page.locator(place)).to_contain_text(text)


def test_cell_is_sent_when_it_is_left_by_enter(sheet):
    type_in(sheet, "start", "0,05")
    expect_text(sheet, "#start-kept", "saved 09:42:16")
    assert sheet.received == [{"start": "0,05"}]
    assert sheet.input_value("#start") == "0.05"
    assert sheet.evaluate("document.activeElement.id") == "end"


def test_cell_left_as_it_was_sends_nothing(sheet):
    type_in(sheet, "start", "0.00")
    type_in(sheet, "end", "10.05")
    expect_text(sheet, "#end-kept", "saved")
    assert sheet.received == [{"end": "10.05"}]


def test_refused_value_stays_with_its_sentence(sheet):
    type_in(sheet, "end", "1o.05")
    expect_text(sheet, "#end-room", 'End is "1o.05": a number in mL is expected.')
    assert sheet.input_value("#end") == "1o.05"
    assert sheet.get_attribute("#end", "aria-invalid") == "true"


def test_kept_value_that_deserves_a_second_look_says_so_and_is_sent_once(sheet):
    type_in(sheet, "end", "33.00")
    expect_text(sheet, "#end-room", "more than 50 % away from the usual. It is saved 09:42:16.")
    assert sheet.get_attribute("#end", "aria-invalid") is None
    sheet.evaluate("window.dispatchEvent(new Event('online'))")
    sheet.wait_for_timeout(200)
    assert sheet.received == [{"end": "33.00"}]


def test_correction_is_recorded_with_its_reason(sheet):
    type_in(sheet, "end", "11.00")
    expect_text(sheet, "#end-room", "Say why it changes")
    sheet.keyboard.type("misread meniscus")
    sheet.keyboard.press("Enter")
    expect_text(sheet, "#end-kept", "saved")
    assert sheet.received[-1] == {"end": "11.00", "reason": "misread meniscus"}
    assert sheet.locator("[data-reason]").count() == 0


def test_correction_can_be_taken_back(sheet):
    type_in(sheet, "end", "11.00")
    sheet.click("[data-reason-back]")
    assert sheet.input_value("#end") == "10.00"
    assert sheet.evaluate("localStorage.length") == 0


def test_value_without_a_connection_is_kept_and_sent_later(sheet):
    sheet.context.set_offline(True)
    sheet.evaluate(OFFLINE)
    type_in(sheet, "end", "10.25")
    expect_text(sheet, "#end-room", "kept on this device")
    sheet.evaluate("document.activeElement.blur()")
    sheet.context.set_offline(False)
    expect_text(sheet, "#end-kept", "saved")
    assert sheet.evaluate("localStorage.length") == 0


def test_value_typed_before_a_reload_is_sent_after_it(sheet):
    sheet.on("dialog", lambda dialog: dialog.accept())
    sheet.fill("#end", "10.35")
    sheet.evaluate("() => { window.fetch = () => Promise.reject(); }")
    sheet.goto(f"{SITE}/sheet")
    expect_text(sheet, "#end-kept", "saved")
    assert sheet.input_value("#end") == "10.35"


def test_value_of_another_person_is_never_sent(sheet):
    sheet.evaluate('localStorage.setItem("unsent:9:/end end end", JSON.stringify({value: "10.45"}))')
    sheet.goto(f"{SITE}/sheet")
    assert sheet.input_value("#end") == "10.00"
    assert sheet.received == []
