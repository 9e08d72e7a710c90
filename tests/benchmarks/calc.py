"""Worksheet functions in LibreOffice: 10,000 cells and one range call, against a native formula and a trivial add-in.

The trivial add-in function is Python inside LibreOffice that gives its argument times two: what a call costs before
anything of ours runs. Every recalculation is one with new numbers, so that no result was met before.
"""

from __future__ import annotations

import io
import itertools
import shutil
import tempfile
import time
import zipfile
from collections.abc import Iterator
from pathlib import Path

from tests.benchmarks.ratio import Ratio

from doubler.hosts import calc_commands, calc_profile

CELLS = 10_000
ROWS = 100_000
ROUNDS = 7
LONG = "DOUBLER.FUNCTIONS."
TRIVIAL = "TRIAL.FUNCTIONS.TWICE"

_IDL = """module trial {
interface XFunctions : com::sun::star::uno::XInterface {
  sequence< sequence<any> > TWICE([in] com::sun::star::beans::XPropertySet caller, [in] any p01);
};
service Functions : XFunctions;
};
"""
_COMPONENT = """import uno
import unohelper
from com.sun.star.lang import XServiceInfo

NAMES = ("trial.Functions", "com.sun.star.sheet.AddIn")


class Functions(unohelper.Base, uno.getClass("trial.XFunctions"), XServiceInfo):
    def __init__(self, context):
        pass

    def TWICE(self, caller, given):
        if isinstance(given, tuple):
            return tuple(tuple(2.0 * cell for cell in row) for row in given)
        return ((2.0 * given,),)

    def getImplementationName(self):
        return "trial.hosts.Functions"

    def supportsService(self, name):
        return name in NAMES

    def getSupportedServiceNames(self):
        return NAMES


g_ImplementationHelper = unohelper.ImplementationHelper()
g_ImplementationHelper.addImplementation(Functions, "trial.hosts.Functions", NAMES)
"""
_PARTS = {
    "META-INF/manifest.xml": """<?xml version="1.0" encoding="UTF-8"?>
<manifest:manifest xmlns:manifest="http://openoffice.org/2001/manifest">
<manifest:file-entry manifest:full-path="trial.idl" \
manifest:media-type="application/vnd.sun.star.uno-typelibrary;type=RDB"/>
<manifest:file-entry manifest:full-path="trial.components" \
manifest:media-type="application/vnd.sun.star.uno-components"/>
<manifest:file-entry manifest:full-path="CalcAddIns.xcu" \
manifest:media-type="application/vnd.sun.star.configuration-data"/>
</manifest:manifest>
""",
    "description.xml": '<?xml version="1.0" encoding="UTF-8"?>\n<description '
    'xmlns="http://openoffice.org/extensions/description/2006"><identifier value="trial.functions"/>'
    '<version value="1"/></description>\n',
    "trial.idl": _IDL,
    "trial.components": """<?xml version="1.0" encoding="UTF-8"?>
<components xmlns="http://openoffice.org/2010/uno-components">
<component loader="com.sun.star.loader.Python" uri="trial_component.py">
<implementation name="trial.hosts.Functions">
<service name="trial.Functions"/><service name="com.sun.star.sheet.AddIn"/>
</implementation></component></components>
""",
    "CalcAddIns.xcu": """<?xml version="1.0" encoding="UTF-8"?>
<oor:component-data xmlns:oor="http://openoffice.org/2001/registry" xmlns:xs="http://www.w3.org/2001/XMLSchema" \
oor:name="CalcAddIns" oor:package="org.openoffice.Office"><node oor:name="AddInInfo">
<node oor:name="trial.Functions" oor:op="replace"><node oor:name="AddInFunctions">
<node oor:name="TWICE" oor:op="replace"><prop oor:name="DisplayName"><value xml:lang="en">TWICE</value></prop>
<prop oor:name="Category"><value>trial</value></prop></node>
</node></node></node></oor:component-data>
""",
    "trial_component.py": _COMPONENT,
}


def trivial_extension() -> bytes:
    """Return the extension with the trivial function."""
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, text in _PARTS.items():
            archive.writestr(name, text)
    return packed.getvalue()


class Sheet:
    """A new spreadsheet in a session, its numbers never twice the same."""

    def __init__(self, office: calc_profile.Driven) -> None:
        self.office = office
        self.numbers: Iterator[int] = itertools.count(1)
        office("open", "sheet", "")

    def new_numbers(self, rows: int) -> None:
        """Put new forces in column A (with kN beside them) and areas in column C; leave zeros in E."""
        base = next(self.numbers) * 0.001
        lines = [[1.0 + base + i * 0.5, "kN", 150.0 + base + i, "mm^2", 0.0] for i in range(rows)]
        self.office("put_rows", "sheet", "", f"A2:E{rows + 1}", lines)

    def microseconds_a_cell(self, formula: str) -> float:
        """Return the best of several recalculations of a formula in 10,000 cells, in microseconds a cell."""
        self.office("put", "sheet", "", {"H2": formula.replace("#", "2")})
        self.office("fill_down", "sheet", "", f"H2:H{CELLS + 1}")
        self.office("automatic", "sheet", False)
        best = float("inf")
        for _ in range(ROUNDS):
            self.new_numbers(CELLS)
            best = min(best, self.office("calculate", "sheet"))
        self.office("automatic", "sheet", True)
        self.office("put_rows", "sheet", "", f"H2:H{CELLS + 1}", [[""]] * CELLS)
        return best / CELLS * 1e6

    def milliseconds(self, formula: str, rows: int) -> float:
        """Return the best of several recalculations of an array formula over that many rows."""
        self.office("automatic", "sheet", False)
        self.office("put_array", "sheet", "", f"J1:J{rows}", formula)
        best = float("inf")
        for _ in range(ROUNDS):
            self.new_numbers(rows)
            best = min(best, self.office("calculate", "sheet"))
        self.office("put_array", "sheet", "", f"J1:J{rows}", "=0")
        self.office("automatic", "sheet", True)
        return best * 1e3


def ratios() -> list[Ratio]:
    """Measure; empty, with a word, where LibreOffice is missing."""
    if shutil.which("soffice") is None:
        print("  LibreOffice is not installed: nothing measured")
        return []
    with tempfile.TemporaryDirectory() as place:
        profile = Path(place) / "profile"
        calc_commands.install(profile)
        trial = Path(place) / "trial.oxt"
        trial.write_bytes(trivial_extension())
        with calc_profile.Driven(profile) as office:
            office("install", str(trial))
        with calc_profile.Driven(profile) as office:
            start = time.perf_counter()
            found = _measured(Sheet(office))
            print(f"  LibreOffice {office.version}, {time.perf_counter() - start:.0f} s")
    return found


def _measured(sheet: Sheet) -> list[Ratio]:
    sheet.office("put", "sheet", "", {"A1": "kN", "C1": "mm^2"})
    native = sheet.microseconds_a_cell("=A#/C#*2")
    trivial = sheet.microseconds_a_cell(f"={TRIVIAL}(A#)")
    cells = {
        "bare numbers and a set": f'={LONG}STRESS_AXIAL(A#;C#;"N-mm")',
        "pairs": f'={LONG}STRESS_AXIAL(A#:B#;C#:D#;"MPa")',
        "a zero, told from an empty cell": f'={LONG}STRESS_AXIAL(E#;C#;"N-mm")',
    }
    found = []
    for name, formula in cells.items():
        ours = sheet.microseconds_a_cell(formula)
        found += [
            Ratio(f"10,000 cells, {name}: µs a cell", ours, 60),
            Ratio(f"10,000 cells, {name}: over the trivial add-in function ({trivial:.1f} µs)", ours / trivial, None),
            Ratio(f"10,000 cells, {name}: over a native formula ({native:.2f} µs)", ours / native, None),
        ]
    for rows, target in ((CELLS, 20.0), (ROWS, None)):
        trivial = sheet.milliseconds(f"={TRIVIAL}(A2:A{rows + 1})", rows)
        native = sheet.milliseconds(f"=A2:A{rows + 1}*2", rows)
        ours = sheet.milliseconds(f'={LONG}STRESS_AXIAL(A1:A{rows + 1};"150 mm^2";"MPa")', rows)
        found += [
            Ratio(f"one call over {rows:,} rows: ms", ours, target),
            Ratio(
                f"one call over {rows:,} rows: over the trivial add-in function ({trivial:.1f} ms)",
                ours / trivial,
                None,
            ),
            Ratio(f"one call over {rows:,} rows: over a native array ({native:.2f} ms)", ours / native, None),
        ]
    return found
