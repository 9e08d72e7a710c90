"""Number formats, one a cell style."""

from __future__ import annotations

from doubler.workbook.package import Package
from doubler.workbook.strings_part import unescape
from doubler.workbook.xml_guard import child, children

BUILT_IN_FORMATS: dict[int, str] = {
    0: "General",
    1: "0",
    2: "0.00",
    3: "#,##0",
    4: "#,##0.00",
    5: '"$"#,##0_);("$"#,##0)',
    6: '"$"#,##0_);[Red]("$"#,##0)',
    7: '"$"#,##0.00_);("$"#,##0.00)',
    8: '"$"#,##0.00_);[Red]("$"#,##0.00)',
    9: "0%",
    10: "0.00%",
    11: "0.00E+00",
    12: "# ?/?",
    13: "# ??/??",
    14: "mm-dd-yy",
    15: "d-mmm-yy",
    16: "d-mmm",
    17: "mmm-yy",
    18: "h:mm AM/PM",
    19: "h:mm:ss AM/PM",
    20: "h:mm",
    21: "h:mm:ss",
    22: "m/d/yy h:mm",
    37: "#,##0 ;(#,##0)",
    38: "#,##0 ;[Red](#,##0)",
    39: "#,##0.00;(#,##0.00)",
    40: "#,##0.00;[Red](#,##0.00)",
    45: "mm:ss",
    46: "[h]:mm:ss",
    47: "mmss.0",
    48: "##0.0E+0",
    49: "@",
}
"""Formats that a file names by number alone (ISO/IEC 29500-1, 18.8.30 numFmt; 5 to 8 depend on the "
"locale)."""


def read_number_formats(package: Package, workbook_part: str) -> list[str]:
    """Return the number format of each cell style, in the order of the style indices.

    Parameters
    ----------
    package : Package
        The opened package.
    workbook_part : str
        Name of the part that lists the sheets.

    Returns
    -------
    list of str
        At least the format of style 0; ``General`` where the file has no styles.
    """
    part = next(iter(package.related(workbook_part, "styles")), None)
    if part is None or not package.has(part):
        return ["General"]
    root = package.root(part)
    own: dict[int, str] = {}
    if (formats := child(root, "numFmts")) is not None:
        for element in children(formats, "numFmt"):
            number, code = element.get("numFmtId", ""), element.get("formatCode")
            if number.isdigit() and code is not None:
                own[int(number)] = unescape(code)
    styles = child(root, "cellXfs")
    if styles is None:
        return ["General"]
    numbers = [
        int(number) if (number := style.get("numFmtId", "0")).isdigit() else 0 for style in children(styles, "xf")
    ]
    return [own.get(number) or BUILT_IN_FORMATS.get(number, "General") for number in numbers] or ["General"]
