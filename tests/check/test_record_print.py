"""The page of a check record on A4 and Letter paper: nothing beyond the margins, nothing made smaller to fit."""

import re
import shutil
import subprocess
from pathlib import Path

import openpyxl
import pytest

from doubler.check.examination import check
from doubler.check.record import write_record
from doubler.check.revisions import compare

PAPERS = {"A4": (595.3, 841.9), "letter": (612.0, 792.0)}
DEJAVU = 1.164
"""Height of a line over the size of its letters, in the fonts that the page falls back to."""
MARGIN = 12 / 25.4 * 72
WORD = re.compile(r'<word xMin="([\d.]+)" yMin="([\d.]+)" xMax="([\d.]+)" yMax="([\d.]+)">(.*?)</word>')


def sheet(path: Path, load: float) -> Path:
    """Build plane stress states and margins under long names, in a sheet with a long name."""
    page = (book := openpyxl.Workbook()).active
    page.title = "Upper skin panel, bay 3 to 4"
    page.append(["Allowable_of_the_upper_skin_panel_in_bay_3_with_all_knock_downs [MPa]", 240.0])
    page.append(["Point", "σx [MPa]", "σy [MPa]", "τxy [MPa]", "Equivalent stress [MPa]", "Margin of safety"])
    for n in range(12):
        row = n + 3
        page.append([f"Point {n}", load + n, -35.0, 40.0 + n,
                     f"=SQRT(B{row}^2-B{row}*C{row}+C{row}^2+3*D{row}^2)", f"=$B$1/(1.5*E{row})-1"])  # fmt: skip
    page["E6"] = "=B6/1000"
    book.save(path)
    return path


@pytest.mark.browser
@pytest.mark.parametrize("paper", PAPERS)
def test_nothing_is_cut_or_shrunk_on_paper(tmp_path: Path, paper: str) -> None:
    reports = [check(sheet(tmp_path / name, load)) for name, load in (("new.xlsx", 80.0), ("old.xlsx", 70.0))]
    record = write_record(reports[0], tmp_path / "out", "2031-05-06", compare(*reports))
    page = record.html.read_text(encoding="utf-8")
    probe = tmp_path / "probe.html"
    probe.write_text(page.replace("</style>", f"@page {{ size: {paper}; }}</style>", 1), encoding="utf-8")
    browser = shutil.which("chromium") or shutil.which("chromium-browser") or "chromium"
    pdf = tmp_path / "probe.pdf"
    subprocess.run(
        [browser, "--headless", "--no-sandbox", "--disable-gpu", f"--user-data-dir={tmp_path}/profile",
         "--no-pdf-header-footer", f"--print-to-pdf={pdf}", probe.as_uri()],
        check=True, capture_output=True, timeout=120,
    )  # fmt: skip
    if not shutil.which("pdftotext"):
        pytest.skip("pdftotext is not installed")
    boxes = subprocess.run(["pdftotext", "-bbox", str(pdf), "-"], check=True, capture_output=True, text=True).stdout
    width, height = map(float, re.findall(r'<page width="([\d.]+)" height="([\d.]+)">', boxes)[0])
    assert (width, height) == pytest.approx(PAPERS[paper], abs=1.0)
    words = [(*map(float, found[:4]), found[4]) for found in WORD.findall(boxes)]
    assert len(words) > 300
    assert min(x for x, _, _, _, _ in words) >= MARGIN - 1
    assert max(x for _, _, x, _, _ in words) <= width - MARGIN + 1
    assert {"Signature", "Mises", "Now", "findings"} <= {word for *_, word in words}  # last columns of the tables
    # A page that is too wide would be made smaller: the body's letters have the size that the page asks for.
    (body,) = [bottom - top for _, top, _, bottom, word in words if word == "Caution."]
    assert body == pytest.approx(9.5 * DEJAVU, rel=0.03)
