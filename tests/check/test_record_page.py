"""The page of a check record: self-contained, told in words too, and whole on screen and on paper."""

import re
import shutil
import subprocess
from html.parser import HTMLParser
from pathlib import Path

import pytest

from check.record_books import colleague, recorded, small_book

VOID = {"meta", "link", "br", "path", "rect", "circle"}


class Outline(HTMLParser):
    """Tags that are open, ids, links and headings of a page."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.ids: list[str] = []
        self.links: list[str] = []
        self.headings: list[str] = []
        self.labels: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        if tag not in VOID:
            self.open.append(tag)
        found = dict(attrs)
        self.ids += [found["id"]] if found.get("id") else []
        self.links += [found["href"]] if found.get("href") else []
        self.labels += [found["aria-labelledby"]] if found.get("aria-labelledby") else []
        if re.fullmatch("h[1-6]", tag):
            self.headings.append(tag)

    def handle_endtag(self, tag: str) -> None:
        if tag not in VOID:
            assert self.open.pop() == tag


def outline(page: str) -> Outline:
    found = Outline()
    found.feed(page)
    assert found.open == ["html"][1:]
    return found


@pytest.fixture(scope="module")
def page_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return recorded(colleague(), tmp_path_factory.mktemp("page")).html


def test_the_page_needs_nothing_from_outside(page_file: Path) -> None:
    page = page_file.read_text(encoding="utf-8")
    assert not re.search(r"https?://|<script|@import|url\((?!#)", page)
    assert all(link.startswith(("#", "data:,")) for link in outline(page).links)


def test_every_link_and_label_leads_somewhere_and_headings_go_down_step_by_step(page_file: Path) -> None:
    found = outline(page_file.read_text(encoding="utf-8"))
    assert len(found.ids) == len(set(found.ids))
    assert {link[1:] for link in found.links if link.startswith("#")} <= set(found.ids)
    assert set(found.labels) <= set(found.ids)
    assert found.headings[0] == "h1"
    assert found.headings.count("h1") == 1
    assert all(int(b[1]) - int(a[1]) <= 1 for a, b in zip(found.headings, found.headings[1:], strict=False))


def test_the_page_tells_what_was_checked_and_what_was_found(page_file: Path) -> None:
    page = page_file.read_text(encoding="utf-8")
    assert "colleague_bracket.xlsx" in page
    assert "36 of 36 (100 %)" in page
    assert "the codes and regulations that apply where the part is used prevail" in page
    assert "the lowest is <strong>−0.297802</strong> in Cases!G11" in page
    assert 'aria-label="B9: error, finding 2"' in page
    assert "4.81 kN·m × 1000 / (16200 mm³)" in page
    for title in ("Sign-off", "Maps of the sheets", "Margins, re-derived", "Chain behind each governing margin"):
        assert f">{title}</h2>" in page


def test_what_the_sheet_says_cannot_become_markup(tmp_path: Path) -> None:
    book = small_book(tmp_path / "a<b>&.xlsx", sheet="x<script>&'")
    page = recorded(book, tmp_path / "out").html.read_text(encoding="utf-8")
    assert "<script" not in page
    outline(page)


@pytest.mark.browser
def test_the_browser_shows_and_prints_the_page_whole(page_file: Path, tmp_path: Path) -> None:
    browser = shutil.which("chromium") or shutil.which("chromium-browser") or "chromium"
    shared = [browser, "--headless", "--no-sandbox", "--disable-gpu", f"--user-data-dir={tmp_path}/profile"]
    shot, paper = tmp_path / "page.png", tmp_path / "page.pdf"
    # A page narrower than its window shows nothing wider than the window: the probe measures and tells in the title.
    probe = page_file.read_text(encoding="utf-8").replace(
        "</body>",
        "<script>window.onerror=function(m){document.title='error '+m};"
        "var e=document.documentElement;document.title='width '+(e.scrollWidth-e.clientWidth)</script></body>",
    )
    (tmp_path / "probe.html").write_text(probe, encoding="utf-8")
    for width in (1200, 800, 500):
        told = subprocess.run(
            [*shared, f"--window-size={width},900", "--dump-dom", f"file://{tmp_path}/probe.html"],
            check=True, capture_output=True, text=True, timeout=120,
        )  # fmt: skip
        assert "<title>width 0</title>" in told.stdout, width
    done = subprocess.run(
        [*shared, "--enable-logging=stderr", "--window-size=1200,1600", f"--screenshot={shot}", page_file.as_uri()],
        check=True, capture_output=True, text=True, timeout=120,
    )  # fmt: skip
    assert "CONSOLE" not in done.stderr
    assert shot.stat().st_size > 20_000
    subprocess.run([*shared, "--no-pdf-header-footer", f"--print-to-pdf={paper}", page_file.as_uri()], check=True,
                   capture_output=True, timeout=120)  # fmt: skip
    if shutil.which("pdftotext"):
        text = subprocess.run(
            ["pdftotext", "-layout", str(paper), "-"], check=True, capture_output=True, text=True
        ).stdout
        # The last columns of the tables are on the paper, and what a folded part says on screen is not.
        for words in ("Signature", "Rests on findings", "Date", "ladder in use"):
            assert words.split()[0] in text
