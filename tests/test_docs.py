"""The documents agree with the program: reference, links, commands, formulas."""

import argparse
import functools
import importlib.util
import re
import shlex
import sys
from pathlib import Path
from types import ModuleType

import pytest

from doubler import catalogue, mechanics
from doubler.cli.arguments import parser

ROOT = Path(__file__).parent.parent
DOCS = ROOT / "docs"
PAGES = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted(DOCS.rglob("*.md"))]
OURS = re.compile(rf"(?<![A-Za-z0-9_])(?:{'|'.join(catalogue.CATEGORIES)})_[A-Z0-9_]*")
by_page = pytest.mark.parametrize("page", PAGES, ids=lambda page: str(page.relative_to(ROOT)))


def script(name: str) -> ModuleType:
    """Return a script of docs/ as a module."""
    if name not in sys.modules:
        spec = importlib.util.spec_from_file_location(name, DOCS / f"{name}.py")
        assert spec is not None
        assert spec.loader is not None
        module = importlib.util.module_from_spec(spec)
        sys.modules[name] = module
        spec.loader.exec_module(module)
    return sys.modules[name]


@functools.cache
def text(page: Path) -> str:
    return page.read_text(encoding="utf-8")


def without_code(page: Path) -> str:
    return re.sub(r"```.*?```|`[^`\n]*`", "", text(page), flags=re.DOTALL)


@functools.cache
def anchors(page: Path) -> set[str]:
    """Return the ids that a page's headings have: lower case, spaces as hyphens, other marks left out."""
    headings = re.findall(r"^#+ +(.+?)\s*$", re.sub(r"```.*?```", "", text(page), flags=re.DOTALL), re.MULTILINE)
    plain = [re.sub(r"\[([^\]]*)\]\([^)]*\)", r"\1", heading) for heading in headings]
    return {re.sub(r"[^\w\- ]", "", heading.lower()).replace(" ", "-") for heading in plain}


def test_the_function_reference_is_what_the_catalogue_says() -> None:
    made = script("make_reference").pages()
    stored = {path.name: text(path) for path in (DOCS / "functions").glob("*.md")}
    differing = sorted(name for name in made.keys() | stored.keys() if made.get(name) != stored.get(name))
    assert not differing, f"run docs/make_reference.py: {', '.join(differing)} are not what the catalogue gives"


def test_every_function_stands_in_the_reference_once() -> None:
    mechanics.load()
    headings = re.findall(r"^## ([A-Z_0-9]+)$", "\n".join(map(text, (DOCS / "functions").glob("*.md"))), re.MULTILINE)
    assert sorted(headings) == sorted(catalogue.names())


@by_page
def test_links_lead_somewhere(page: Path) -> None:
    broken = []
    for target in re.findall(r"\]\(([^)\s]+)\)", without_code(page)):
        if re.match(r"[a-z]+:", target):
            continue
        path, _, anchor = target.partition("#")
        there = (page.parent / path).resolve() if path else page
        if not there.exists() or (anchor and anchor not in anchors(there)):
            broken.append(target)
    assert not broken


def commands(page: Path) -> list[str]:
    """Return the commands of `doubler` in a page's code, each as one line."""
    blocks = re.findall(r"```(?:sh|console|yaml|bash)\n(.*?)```", text(page), re.DOTALL)
    lines = [line.strip() for block in blocks for line in block.replace("\\\n", " ").splitlines()]
    lines += re.findall(r"`((?:\.venv/bin/)?doubler [^`\n]+)`", re.sub(r"```.*?```", "", text(page), flags=re.DOTALL))
    found = [re.sub(r"^(?:\$ |- run: |run: )", "", line) for line in lines]
    return [line for line in found if re.match(r"(?:\.venv/bin/)?doubler(?: |$)", line)]


@by_page
def test_commands_exist_with_their_options(page: Path) -> None:
    verbs = next(a for a in parser()._actions if isinstance(a, argparse._SubParsersAction)).choices
    for command in commands(page):
        words = shlex.split(command.replace("…", ""), comments=True)[1:]
        top = {option for action in parser()._actions for option in action.option_strings}
        if not words or words[0] in top:
            continue
        assert words[0] in verbs, command
        known = {option for action in verbs[words[0]]._actions for option in action.option_strings}
        assert {word for word in words if re.match(r"--[a-z]", word)} <= known, command


@by_page
def test_functions_named_exist(page: Path) -> None:
    mechanics.load()
    known = {*catalogue.names(), "UNIT_REASON"}  # the hosts' companion, which reads the calling cell
    for name in set(OURS.findall(text(page))):
        assert name in known or (name.endswith("_") and any(k.startswith(name) for k in known)), name
