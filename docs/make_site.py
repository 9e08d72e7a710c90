"""Make a static site of README and docs in a folder: ``.venv/bin/python docs/make_site.py site``.

Needs the extra ``docs``. The site is read from the disk or from any server: no script, nothing from the network;
formulas are MathML, with their font beside the style.
"""

from __future__ import annotations

import argparse
import html
import itertools
import os
import posixpath
import re
import shutil
from collections.abc import Sequence
from importlib.util import find_spec
from pathlib import Path
from typing import Any

from latex2mathml.converter import convert
from markdown_it import MarkdownIt
from markdown_it.token import Token

ROOT = Path(__file__).parent.parent
STYLE = Path(__file__).with_name("site.css")
FONT = "STIXTwoMath-Regular.ttf"
"""The font of the formulas, under the SIL Open Font License; ziamath carries it."""
SECTIONS = {
    "Guide": (
        "README.md",
        "docs/README.md",
        "docs/tutorial.md",
        "docs/tour.md",
        "docs/conventions.md",
        "docs/hosts.md",
        "docs/tour-calc.md",
    ),
    "How-tos": ("docs/how-to/*.md",),
    "Functions": ("docs/functions/*.md",),
    "Theory": ("docs/theory/*.md",),
    "Findings": ("docs/findings/*.md",),
    "More": ("docs/*.md", "workbook_templates/README.md", "DEVELOPERS.md", "CHANGELOG.md"),
}
"""The pages, by the section of the navigation in which each stands first."""


def main() -> None:
    """Write the site into the folder that the command line names."""
    options = argparse.ArgumentParser(description="Make a static site of README and docs.")
    options.add_argument("folder", type=Path, help="where to write it; made if missing")
    folder = options.parse_args().folder
    print(f"{len(write_site(folder))} pages in {folder}; open {folder / 'index.html'}")


def write_site(folder: Path) -> list[Path]:
    """Write every page, the style and the pictures; return the pages' files."""
    sections = found_pages()
    known = {page for pages in sections.values() for page in pages}
    titles = {page: title_of((ROOT / page).read_text(encoding="utf-8")) for page in known}
    written = []
    for page in sorted(known):
        target = folder / address(page)
        target.parent.mkdir(parents=True, exist_ok=True)
        write(target, whole_page(page, sections, titles))
        written.append(target)
    write(folder / "site.css", STYLE.read_text(encoding="utf-8"))
    package = find_spec("ziamath")
    if package is None or package.origin is None:
        raise SystemExit("ziamath, which carries the formulas' font, is missing: pip install 'doubler[docs]'")
    shutil.copyfile(Path(package.origin).parent / "fonts" / FONT, folder / FONT)
    for picture in (*ROOT.glob("docs/**/*.png"), *ROOT.glob("docs/**/*.svg")):
        target = folder / picture.relative_to(ROOT)
        target.parent.mkdir(parents=True, exist_ok=True)
        shutil.copyfile(picture, target)
    return written


def write(target: Path, text: str) -> None:
    """Write a file beside its target, then rename it."""
    temporary = target.with_name(f".{target.name}.part")
    temporary.write_text(text, encoding="utf-8")
    temporary.replace(target)


def found_pages() -> dict[str, list[str]]:
    """Return the pages that are there, by section; each page once, a folder's README first."""
    taken: set[str] = set()
    sections: dict[str, list[str]] = {}
    for section, patterns in SECTIONS.items():
        pages: list[str] = []
        for pattern in patterns:
            found = [path.relative_to(ROOT).as_posix() for path in ROOT.glob(pattern)]
            pages += sorted(found, key=lambda page: (not page.endswith("README.md"), page))
        sections[section] = [page for page in dict.fromkeys(pages) if page not in taken]
        taken |= set(pages)
    return {section: pages for section, pages in sections.items() if pages}


def address(page: str) -> str:
    """Return the site's address of a Markdown file: a README is its folder's index."""
    return re.sub(r"(^|/)README\.html$", r"\1index.html", page.removesuffix(".md") + ".html")


def title_of(text: str) -> str:
    """Return the first heading of a page."""
    found = re.search(r"^# (.+)$", text, re.MULTILINE)
    return found[1] if found else ""


def whole_page(page: str, sections: dict[str, list[str]], titles: dict[str, str]) -> str:
    """Return a page with its frame."""
    here = posixpath.dirname(address(page))

    def link(target: str) -> str:
        return posixpath.relpath(address(target), here or ".")

    navigation = []
    for section, pages in sections.items():
        entries = "".join(
            f"<li><a href='{link(other)}'{' aria-current=page' if other == page else ''}>"
            f"{html.escape(short_title(titles[other]))}</a></li>"
            for other in pages
        )
        opened = " open" if page in pages else ""
        navigation.append(f"<details{opened}><summary>{section}</summary><ul>{entries}</ul></details>")
    style = posixpath.relpath("site.css", here or ".")
    body, headings = rendered((ROOT / page).read_text(encoding="utf-8"), page, set(titles))
    body = body.replace("</h1>", f"</h1>{on_this_page(headings)}", 1)
    return (
        "<!doctype html><html lang=en><head><meta charset=utf-8>"
        "<meta name=viewport content='width=device-width, initial-scale=1'>"
        "<meta name=color-scheme content='light dark'><link rel=icon href='data:,'>"
        f"<title>{html.escape(short_title(titles[page]))} · doubler</title><link rel=stylesheet href='{style}'></head>"
        f"<body><a class=skip href='#text'>To the text</a><nav aria-label=Pages>"
        f"<a class=home href='{link('README.md')}'>doubler</a>{''.join(navigation)}</nav>"
        f"<main id=text>{body}</main></body></html>\n"
    )


def short_title(title: str) -> str:
    """Return a heading without markup and, for a long one, without what follows the colon."""
    plain = re.sub(r"[`*]", "", title)
    return plain if len(plain) <= 72 else plain.split(":")[0]


def on_this_page(headings: Sequence[tuple[str, str]]) -> str:
    """Return the list of a long page's headings."""
    if len(headings) < 6:
        return ""
    entries = "".join(f"<li><a href='#{slug}'>{html.escape(text)}</a></li>" for slug, text in headings)
    return f"<details class=contents><summary>On this page ({len(headings)})</summary><ul>{entries}</ul></details>"


def rendered(text: str, page: str, known: set[str]) -> tuple[str, list[tuple[str, str]]]:
    """Return the HTML of a page's Markdown, and its second-level headings."""
    markdown = MarkdownIt("commonmark").enable(["table", "strikethrough"])
    markdown.add_render_rule("fence", fence)
    markdown.add_render_rule("table_open", lambda *_: "<div class=wide><table>")
    markdown.add_render_rule("table_close", lambda *_: "</table></div>")
    tokens = markdown.parse(text)
    headings = []
    for token, inline in itertools.pairwise(tokens):
        if token.type == "heading_open":
            plain = "".join(child.content for child in inline.children or ())
            token.attrSet("id", slug(plain))
            if token.tag == "h2":
                headings.append((slug(plain), plain))
    for token in tokens:
        if token.type == "inline":
            token.children = inline_math(token.children or [])
            for child in token.children:
                relink(child, page, known)
    return str(markdown.renderer.render(tokens, markdown.options, {})), headings


def slug(heading: str) -> str:
    """Return the id of a heading, as GitHub makes it."""
    return re.sub(r"[^\w\- ]", "", heading.lower()).replace(" ", "-")


def fence(_renderer: Any, tokens: Sequence[Token], index: int, _options: Any, _env: Any) -> str:
    """Render a fenced block: a formula, or text to read as it stands."""
    token = tokens[index]
    if token.info.strip() == "math":
        return f"<div class=formula>{mathml(token.content.strip(), display=True)}</div>\n"
    # One line, such as a formula as typed, may turn over; more lines stand as they are.
    turning = "" if token.content.rstrip("\n").count("\n") else " class=turning"
    return f"<pre{turning}><code>{html.escape(token.content)}</code></pre>\n"


def mathml(latex: str, *, display: bool) -> str:
    """Return LaTeX as MathML, with what browsers leave out of it restated."""
    latex = re.sub(r"\\operatorname\*?\{([^}]*)\}", r"\\mathrm{\1}", latex)
    latex = re.sub(r"\\arg(?![a-zA-Z])", r"\\mathrm{arg}\\,", latex)
    made = convert(latex.replace("°", r"^\circ "), display="block" if display else "inline")
    made = re.sub(r'mathvariant="bold(?:-italic)?"', 'style="font-weight:bold"', made)
    if re.search(r"\\[a-zA-Z]", made):
        raise ValueError(f"a command in this formula is not known to the converter: {latex}")
    return made


def inline_math(children: Sequence[Token]) -> list[Token]:
    """Turn ``$`…`$`` in a line into MathML."""
    found: list[Token] = []
    for position, child in enumerate(children):
        before, after = children[position - 1 : position], children[position + 1 : position + 2]
        if (
            child.type == "code_inline"
            and before and before[0].content.endswith("$")
            and after and after[0].content.startswith("$")
        ):  # fmt: skip
            found[-1].content = found[-1].content.removesuffix("$")
            after[0].content = after[0].content.removeprefix("$")
            child = Token("html_inline", "", 0, content=mathml(child.content, display=False))  # noqa: PLW2901
        found.append(child)
    return found


def relink(token: Token, page: str, known: set[str]) -> None:
    """Let a link to a page lead to its HTML; what is not in the site becomes plain text."""
    if token.type == "link_open":
        target = str(token.attrGet("href") or "")
        if re.match(r"[a-z]+:|#", target):
            return
        path, mark, anchor = target.partition("#")
        meant = posixpath.normpath(posixpath.join(posixpath.dirname(page), path))
        if os.path.isdir(ROOT / meant) and f"{meant}/README.md" in known:
            meant = f"{meant}/README.md"
        if meant in known:
            here = posixpath.dirname(address(page)) or "."
            token.attrSet("href", posixpath.relpath(address(meant), here) + mark + anchor)
        else:
            del token.attrs["href"]
            token.attrSet("title", f"in the repository: {meant}")
    if token.type == "image":
        source = str(token.attrGet("src") or "")
        here = posixpath.dirname(address(page)) or "."
        meant = posixpath.normpath(posixpath.join(posixpath.dirname(page), source))
        token.attrSet("src", posixpath.relpath(meant, here))
        token.attrSet("loading", "lazy")


if __name__ == "__main__":
    main()
