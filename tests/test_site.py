"""The static site: made without a network, whole, and looked at in a real browser."""

import html
import json
import re
import shutil
import subprocess
from pathlib import Path

import pytest

from test_docs import script

LOOK = """<!doctype html><meta charset=utf-8><title>waiting</title><body><script>
const pages = PAGES, found = [];
const RAW = /\\\\(?:[dt]?frac|sqrt|sum|int|left|right|quad|text|cdot|begin|[a-z]*sigma|tau|pi)|\\$`|`\\$/g;
function look(page, frame) {
  const d = frame.contentDocument, w = frame.contentWindow;
  const boxes = [...d.querySelectorAll('math')].map(m => m.getBoundingClientRect());
  const plain = d.body.cloneNode(true);
  plain.querySelectorAll('pre, code').forEach(e => e.remove());
  found.push({page, formulas: boxes.length, flat: boxes.filter(b => b.width < 4 || b.height < 4).length,
    faults: d.querySelectorAll('merror').length, raw: plain.textContent.match(RAW) || [],
    wide: d.documentElement.scrollWidth - w.innerWidth, style: w.getComputedStyle(d.body).display,
    pictures: [...d.images].filter(i => i.complete && !i.naturalWidth).map(i => i.src)});
}
async function run() {
  for (const page of pages) {
    const frame = document.createElement('iframe');
    frame.width = 1200; frame.height = 900;
    await new Promise(done => { frame.onload = done; frame.src = page; document.body.append(frame); });
    frame.contentDocument.querySelectorAll('details').forEach(d => d.open = true);
    frame.contentDocument.querySelectorAll('img').forEach(i => i.loading = 'eager');
    await Promise.all([...frame.contentDocument.images].map(i => i.decode().catch(() => 0)));
    look(page, frame); frame.remove();
  }
  document.body.textContent = JSON.stringify(found); document.title = 'done';
}
run().catch(e => { console.error(e); document.body.textContent = 'failed ' + e; });
</script>"""
"""Opens every page in a frame, measures its formulas and pictures, and leaves the findings as the body's text."""


@pytest.fixture(scope="module")
def site(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("site")
    script("make_site").write_site(folder)
    return folder


def test_the_site_needs_nothing_from_outside(site: Path) -> None:
    style = (site / "site.css").read_text(encoding="utf-8")
    assert "@import" not in style
    for name in re.findall(r"url\(\"?([^\")]+)", style):
        assert (site / name).is_file()
    for page in site.rglob("*.html"):
        text = page.read_text(encoding="utf-8").replace("http://www.w3.org/1998/Math/MathML", "")
        assert not re.search(r"<script|(?:src|href)=[\"']?(?:https?:)?//[^\"']+\.(?:js|css|png|svg|woff)", text), page


def test_every_link_leads_to_a_place_in_the_site(site: Path) -> None:
    pages = {page.resolve(): page.read_text(encoding="utf-8") for page in site.rglob("*.html")}
    ids = {page: set(re.findall(r"\bid=[\"']?([^\"'\s>]+)", text)) for page, text in pages.items()}
    broken = []
    for page, text in pages.items():
        for link in re.findall(r"(?:href|src)=[\"']([^\"']+)[\"']", text):
            path, _, anchor = html.unescape(link).partition("#")
            if re.match(r"[a-z]+:", path):
                continue
            there = (page.parent / path).resolve() if path else page
            if not there.is_file() or (anchor and anchor not in ids[there]):
                broken.append(f"{page.name}: {link}")
    assert not broken


def test_a_formula_that_the_converter_does_not_know_is_refused() -> None:
    with pytest.raises(ValueError, match="not known"):
        script("make_site").mathml(r"\nosuchcommand x", display=True)


def look_at(page: Path) -> "subprocess.CompletedProcess[str]":
    browser = shutil.which("chromium") or shutil.which("chromium-browser") or "chromium"
    return subprocess.run(
        [
            browser, "--headless", "--no-sandbox", "--allow-file-access-from-files", "--enable-logging=stderr",
            "--window-size=1280,1000", "--timeout=240000", "--virtual-time-budget=600000", "--dump-dom", page.as_uri(),
        ],
        capture_output=True, text=True, timeout=300, check=True,
    )  # fmt: skip


@pytest.mark.browser
def test_every_page_loads_without_faults_and_shows_its_formulas(site: Path) -> None:
    pages = sorted(page.relative_to(site).as_posix() for page in site.rglob("*.html"))
    look = site / "look.html"
    look.write_text(LOOK.replace("PAGES", json.dumps(pages)), encoding="utf-8")
    for _ in range(4):  # a busy machine's browser may give the page back before its script has ended
        run = look_at(look)
        body = re.search(r"<body>(.*)</body>", run.stdout, re.DOTALL)
        if body is not None and not body[1].lstrip().startswith("<script"):
            break
    look.unlink()
    said = re.findall(r".*CONSOLE.*", run.stderr)
    assert not said, said
    assert body is not None
    found = json.loads(html.unescape(body[1]))
    assert [item["page"] for item in found] == pages
    for item in found:
        assert item["style"] == "grid", f"{item['page']} has no style"
        assert [item[fault] for fault in ("flat", "faults", "raw", "pictures")] == [0, 0, [], []], item
        assert item["wide"] <= 0, f"{item['page']} is {item['wide']} px wider than the window"
        source = (site / item["page"]).read_text(encoding="utf-8")
        assert item["formulas"] == len(re.findall("<math ", source))
    assert sum(item["formulas"] for item in found) > 400
