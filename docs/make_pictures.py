"""Make the pictures of README and docs: a filled sheet, the summary, a check on the terminal, the check record.

Needs LibreOffice, pdftoppm and Chromium. Run from the repository: ``.venv/bin/python docs/make_pictures.py``.
"""

from __future__ import annotations

import argparse
import os
import subprocess
import tempfile
from pathlib import Path

IMAGES = Path(__file__).parent / "images"


def main() -> None:
    """Run the demo in a temporary folder and take the pictures of what it made."""
    os.environ["COLUMNS"] = "128"
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        terminal(folder)
        filled = sorted((folder / "demo" / "filled").glob("LC172*.xlsx"))[0]
        sheet(filled, IMAGES / "filled_sheet.png", 80)
        sheet(folder / "demo" / "filled" / "summary.xlsx", IMAGES / "summary.png", 80)
        page = folder / "demo" / "record" / "colleague_bracket.check.html"
        screenshot(page, IMAGES / "check_record.png", 1100, 1300)


def terminal(folder: Path) -> None:
    """Run the demo and picture its check."""
    from rich.console import Console

    from doubler.cli import checking, demonstration

    screen = Console(record=True, width=128, force_terminal=True, highlight=False, markup=False, emoji=False)
    checking.console = lambda: screen
    demonstration.run_demo(argparse.Namespace(out=str(folder / "demo")))
    text = screen.export_html(inline_styles=True, code_format="<pre>{code}</pre>")
    page = folder / "terminal.html"
    page.write_text(
        "<!doctype html><meta charset=utf-8><style>body{margin:0;background:#12202b;color:#e6edf0;padding:18px 22px}"
        "pre{font:13px/1.45 'DejaVu Sans Mono',monospace;margin:0}"
        "pre span[style*='#800000']{color:#ff8a73!important} pre span[style*='#808000']{color:#f2c86b!important}"
        "pre span[style*='#008080']{color:#7fd3cf!important} pre span[style*='#008000']{color:#8fd19e!important}"
        "pre span[style*='#7f7f7f']{color:#9fb0ba!important}</style>"
        f"{text}",
        encoding="utf-8",
    )
    screenshot(page, IMAGES / "check_terminal.png", 1080, 720)


def sheet(book: Path, target: Path, dots: int) -> None:
    """Picture the first page of a workbook as LibreOffice prints it."""
    with tempfile.TemporaryDirectory() as name:
        subprocess.run(
            ["soffice", "--headless", "--convert-to", "pdf", "--outdir", name, str(book)],
            check=True,
            capture_output=True,
        )
        pdf = next(Path(name).glob("*.pdf"))
        stem = target.with_suffix("")
        subprocess.run(["pdftoppm", "-r", str(dots), "-png", "-l", "1", "-singlefile", str(pdf), str(stem)], check=True)


def screenshot(page: Path, target: Path, width: int, height: int) -> None:
    """Picture a page as Chromium shows it."""
    subprocess.run(
        [
            "chromium", "--headless", "--no-sandbox", "--hide-scrollbars", f"--window-size={width},{height}",
            f"--screenshot={target}", page.as_uri(),
        ],
        check=True,
        capture_output=True,
    )  # fmt: skip


if __name__ == "__main__":
    main()
