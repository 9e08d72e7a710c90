"""Comments of a sheet: the plain ones, and threads of them."""

from __future__ import annotations

from doubler.errors import InputError
from doubler.workbook.addresses import parse_cell
from doubler.workbook.model import Address
from doubler.workbook.package import Package
from doubler.workbook.strings_part import rich_text
from doubler.workbook.xml_guard import child, children, local_name


def read_comments(package: Package, sheet_part: str) -> dict[Address, str]:
    """Return the comments of a sheet by cell.

    Parameters
    ----------
    package : Package
        The opened package.
    sheet_part : str
        Name of the sheet's part.

    Returns
    -------
    dict
        Text by cell. A thread gives its texts one below the other; the plain comment that is stored beside a
        thread for older programs only says so, and is left out.
    """
    found: dict[Address, str] = {}
    for part in package.related(sheet_part, "comments"):
        if not package.has(part):
            continue
        for listing in children(package.root(part), "commentList"):
            for comment in children(listing, "comment"):
                address = _address(comment.get("ref"))
                text = child(comment, "text")
                if address is not None and text is not None:
                    found[address] = rich_text(text)
    threads: dict[Address, list[str]] = {}
    for part in package.related(sheet_part, "threadedComment"):
        if not package.has(part):
            continue
        for comment in package.root(part):
            address = _address(comment.get("ref"))
            text = child(comment, "text")
            if local_name(comment) == "threadedComment" and address is not None and text is not None:
                threads.setdefault(address, []).append(text.text or "")
    found.update({address: "\n".join(texts) for address, texts in threads.items()})
    return found


def _address(text: str | None) -> Address | None:
    try:
        return parse_cell((text or "").partition(":")[0])
    except InputError:
        return None
