"""`doubler host excel install | remove | status | test`, through xlwings' open-source part, on Windows."""

from __future__ import annotations

import importlib
import importlib.metadata
import importlib.util
import os
import sys
from pathlib import Path

from doubler import __version__
from doubler.errors import InputError
from doubler.hosts.calc_commands import Finding, Report
from doubler.workbook.output import write_file


def run(action: str, profile: Path | None) -> Report:
    """Do one of install, remove, status, test; `profile` is another folder than the user's for the VBA module."""
    folder = profile or default_folder()
    return {"install": install, "remove": remove, "status": status, "test": test}[action](folder)


def default_folder() -> Path:
    """Return where the VBA module is written."""
    roaming = os.environ.get("APPDATA")
    return (Path(roaming) if roaming else Path.home() / ".config") / "doubler"


def module_path(folder: Path) -> Path:
    """Return the VBA module's file."""
    return folder / "doubler_functions.bas"


def _needs_windows() -> None:
    if sys.platform != "win32":
        raise InputError(
            "Excel's worksheet functions run on Windows only; on this system use LibreOffice: doubler host calc install"
        )


def install(folder: Path) -> Report:
    """Write the VBA module and say how it becomes an add-in; Excel itself is not touched."""
    _needs_windows()
    if importlib.util.find_spec("xlwings") is None:
        raise InputError("xlwings is not installed; install it: pip install doubler[excel]")
    from doubler.hosts.excel_vba import vba_module

    functions = importlib.import_module("doubler.hosts.excel_functions")
    udfs = importlib.import_module("xlwings.udfs")
    target = module_path(folder)
    folder.mkdir(parents=True, exist_ok=True)
    # The VBA editor reads the system's code page; the module is ASCII.
    write_file(target, [vba_module(functions, udfs.generate_vba_wrapper).replace("\n", "\r\n").encode("ascii")])
    return Report(
        (
            f"the VBA module is written: {target}",
            "make it an add-in once, as docs/hosts.md shows: xlwings quickstart doubler_addin --addin --ribbon,",
            "open doubler_addin.xlam, import the module in the VBA editor, set Interpreter_Win and UDF_Modules, save",
            f"Interpreter_Win: {sys.executable}",
            "UDF_Modules: doubler.hosts.excel_functions",
            "to undo: doubler host excel remove, and remove the add-in in Excel under File > Options > Add-ins",
        )
    )


def remove(folder: Path) -> Report:
    """Remove the VBA module's file."""
    target = module_path(folder)
    if not target.exists():
        return Report((f"there is no {target}; nothing was installed there",))
    target.unlink()
    return Report(
        (f"removed {target}", "an add-in made from it stays: remove it under File > Options > Add-ins > Excel add-ins")
    )


def status(folder: Path) -> Report:
    """Name versions and what keeps the functions from working, each with its cure."""
    found = [
        Finding(
            "system",
            sys.platform == "win32",
            sys.platform,
            "worksheet functions in Excel need Windows; on this system use LibreOffice: doubler host calc install",
        ),
        _package("xlwings", "pip install doubler[excel]"),
        _package("pywin32", "pip install pywin32 (it comes with xlwings on Windows)"),
        Finding("VBA module", module_path(folder).is_file(), str(module_path(folder)), "doubler host excel install"),
        Finding("doubler", True, __version__),
    ]
    if sys.platform == "win32":
        found.append(_excel())
    lines = [
        f"{'ok ' if f.right else 'BAD'} {f.what}: {f.found}" + ("" if f.right or not f.cure else f" -> {f.cure}")
        for f in found
    ]
    return Report(tuple(lines), tuple(found), all(f.right for f in found))


def _package(name: str, cure: str) -> Finding:
    try:
        return Finding(name, True, importlib.metadata.version(name))
    except importlib.metadata.PackageNotFoundError:
        return Finding(name, False, "not installed", cure)


def _excel() -> Finding:
    """Look whether Excel is registered as a program that can be driven; one from the Store is not, in some versions."""
    winreg = importlib.import_module("winreg")
    try:
        winreg.CloseKey(winreg.OpenKey(winreg.HKEY_CLASSES_ROOT, "Excel.Application"))
    except OSError:
        return Finding(
            "Excel", False, "not registered", "install desktop Excel from Microsoft 365, not the Store's or the web's"
        )
    return Finding("Excel", True, "registered")


def test(folder: Path) -> Report:
    """Open the conformance workbook in Excel with the add-in loaded and compare every function.

    Not tried against a real Excel by the tool's own tests.
    """
    _needs_windows()
    import tempfile

    from doubler.errors import ErrorValue
    from doubler.hosts import conformance

    if not module_path(folder).is_file():
        raise InputError("the functions are not installed; run: doubler host excel install")
    xlwings = importlib.import_module("xlwings")
    known = conformance.calls()
    wrong: list[str] = []
    with tempfile.TemporaryDirectory() as place:
        path = Path(place) / "conformance.xlsx"
        where = conformance.write_workbook(path, known)
        book = xlwings.Book(str(path))
        try:
            book.app.api.CalculateFull()
            sheet = book.sheets[conformance.SHEET]
            errors = {value.value: value for value in ErrorValue}
            for item in where:
                shown = sheet.range(item.block).options(ndim=2, err_to_str=True).value
                grid = [[errors.get(v, v) if isinstance(v, str) else v for v in row] for row in shown]
                wrong += conformance.differences(grid, item.call)
        finally:
            book.close()
    first = f"{len({c.function for c in known})} functions in {len(known)} calls, Excel: {len(wrong)} cells differ"
    return Report((first, *wrong), tuple(Finding("call", False, w) for w in wrong), not wrong)


test.__test__ = False  # type: ignore[attr-defined]  # not a test of ours: a verb of the command line
