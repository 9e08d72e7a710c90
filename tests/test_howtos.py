"""The how-tos, command by command: files are written, commands run, statuses and outputs compared."""

import os
import re
import subprocess
import sys
from pathlib import Path

import pytest

from doubler import demo_data

HOW_TO = Path(__file__).parent.parent / "docs" / "how-to"
FIRST = "own-template.md"
PAGES = sorted(path.name for path in HOW_TO.glob("*.md"))
BLOCK = re.compile(r"^```(\S+)(?: (\S+))?\n(.*?)^```$", re.DOTALL | re.MULTILINE)


def blocks(page: str) -> list[tuple[str, str, str]]:
    """Return kind, file name and content of each block of code."""
    return [match.groups(default="") for match in BLOCK.finditer((HOW_TO / page).read_text(encoding="utf-8"))]


def run(command: str, folder: Path) -> str:
    """Run a line of a page; its comment names the status if that is not zero. Return what it printed."""
    line, _, remark = command.partition("   # status ")
    programs = f"{Path(sys.executable).parent}{os.pathsep}{os.environ['PATH']}"
    environment = os.environ | {"PATH": programs, "TEMPLATES": str(demo_data.templates_folder()), "COLUMNS": "140"}
    done = subprocess.run(
        ["bash", "-c", line], cwd=folder, env=environment, capture_output=True, text=True, check=False, timeout=120
    )
    assert done.returncode == int(remark or 0), f"{command}\n{done.stdout}\n{done.stderr}"
    return done.stdout


def agrees(shown: str, printed: str) -> bool:
    """Compare a page's output with the real one; … stands for anything, spaces count as one."""
    pieces = [re.escape(" ".join(piece.split())) for piece in shown.split("…")]
    return (
        re.search(r".*?".join(re.sub(r"(\\ )+", r"\\s*", piece) for piece in pieces), " ".join(printed.split()))
        is not None
    )


def follow(page: str, folder: Path) -> int:
    """Do what a page says; return how many commands it had."""
    printed, commands = "", 0
    for kind, name, content in blocks(page):
        if name:
            (folder / name).write_text(content, encoding="utf-8")
        elif kind == "sh":
            lines = [line for line in content.splitlines() if line.strip()]
            printed = "\n".join(run(line, folder) for line in lines)
            commands += len(lines)
        elif kind == "text":
            assert agrees(content, printed), f"{page} shows\n{content}\nbut the commands print\n{printed}"
    return commands


@pytest.mark.parametrize("page", PAGES)
def test_a_how_to_can_be_followed_to_the_letter(page: str, tmp_path: Path) -> None:
    if page != FIRST:
        name, content = next((name, content) for kind, name, content in blocks(FIRST) if kind == "python")
        (tmp_path / name).write_text(content, encoding="utf-8")
        run(f"python {name}", tmp_path)
    assert follow(page, tmp_path) > 0


def test_output_is_compared_with_what_is_printed() -> None:
    assert agrees("ms … 0.5\nnext", "ms_yield   0.5\n\nnext line")
    assert not agrees("ms … 0.6", "ms_yield   0.5")
