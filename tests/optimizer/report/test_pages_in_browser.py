"""Report and comparison in a real browser: a nasty study name is text there, and nothing runs."""

import html
import json
import re
import shutil
import subprocess
from dataclasses import replace

import pytest

from optimizer.comparison import compare
from optimizer.comparison.page import comparison_page
from optimizer.decision import shortlist
from optimizer.report import report
from optimizer.report.html_writer import html_page

BROWSER = shutil.which("chromium") or shutil.which("chromium-browser")
FLAGS = (
    "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-sync",
    "--disable-background-networking", "--disable-component-update", "--window-size=1200,2000",
    "--virtual-time-budget=5000", "--dump-dom",
)  # fmt: skip
NASTY = "</script><img onerror=document.title='ran' src=x>"
PROBE = """<script>addEventListener('load', () => {
  const told = document.createElement('pre'); told.id = 'told';
  const images = [...document.images];
  told.textContent = JSON.stringify({
    title: document.title, drawn: images.filter(image => image.naturalWidth > 100).length,
    images: images.length, wide: document.documentElement.scrollWidth - innerWidth,
    text: document.body.innerText});
  document.body.append(told)})</script>"""

pytestmark = pytest.mark.skipif(BROWSER is None, reason="needs chromium to draw the page")


@pytest.fixture(scope="module")
def nasty(stored):
    return replace(stored, study=replace(stored.study, name=NASTY, description=f"Site {NASTY}"))


def pages(run):
    picked = shortlist(run.study, run.table, run.margins)
    return {"report": html_page(report(run, picked)), "comparison": comparison_page(compare([run, run]))}


@pytest.mark.parametrize("kind", ["report", "comparison"])
def test_the_name_is_text_and_the_charts_are_drawn(nasty, kind, tmp_path):
    page = tmp_path / "page.html"
    policy = "default-src 'none'; style-src 'unsafe-inline'; img-src data:"
    text = pages(nasty)[kind]
    assert policy in text
    # with the policy lifted, so that the page's own markup alone has to keep the name from running
    page.write_text(re.sub(r"<meta http-equiv[^>]+>", "", text).replace("</head>", f"{PROBE}</head>"))
    command = [BROWSER, *FLAGS, f"--user-data-dir={tmp_path / 'profile'}", page.as_uri()]
    done = subprocess.run(command, capture_output=True, text=True, timeout=60, check=False)
    found = re.search(r'<pre id="told">(.*?)</pre>', done.stdout, re.DOTALL)
    assert found, done.stderr[-2000:]
    told = json.loads(html.unescape(found.group(1)))
    assert NASTY in told["text"]
    assert told["title"] != "ran"
    assert (told["images"], told["drawn"]) == (3, 3)
    assert told["wide"] <= 0
