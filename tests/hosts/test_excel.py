"""Excel's functions through xlwings' own machinery; only the COM modules are stood in for."""

import importlib
import re
import sys
import types

import pytest

from doubler import catalogue
from doubler.errors import ErrorValue, InputError
from doubler.hosts import conformance, excel_commands, excel_functions
from doubler.hosts.excel_functions import MARK
from doubler.hosts.excel_functions import excel_functions as served
from doubler.hosts.excel_names import RESERVED, vba_names
from doubler.hosts.excel_vba import corrected, vba_module


class ComError(Exception):
    pass


@pytest.fixture(scope="module")
def udfs():
    """xlwings' real module of worksheet functions."""
    import ctypes
    from unittest.mock import MagicMock

    import xlwings

    plain = ["pythoncom", "pywintypes", "win32com", "win32com.client", "win32api", "win32con", "win32gui"]
    stood_in = {name: MagicMock(__name__=name) for name in [*plain, "win32process", "win32timezone"]}
    stood_in["pythoncom"].__file__ = "pythoncom"
    stood_in["pywintypes"].com_error = ComError
    stood_in["pywintypes"].TimeType = type("TimeType", (), {})
    for name in ("CDispatch", "CoClassBaseClass", "DispatchBaseClass"):
        setattr(stood_in["win32com.client"], name, type(name, (), {}))
    stood_in["win32com"].client = stood_in["win32com.client"]
    server = types.ModuleType("xlwings.com_server")
    server.loop = None
    stood_in["xlwings.com_server"] = server
    real = ["xlwings.udfs", "xlwings._xlwindows", "xlwings._win32patch"]
    with pytest.MonkeyPatch.context() as patch:
        for name in real:
            patch.delitem(sys.modules, name, raising=False)
        for name, module in stood_in.items():
            patch.setitem(sys.modules, name, module)
        for name in ("windll", "oledll"):
            patch.setattr(ctypes, name, MagicMock(), raising=False)
        patch.setattr(ctypes, "PyDLL", MagicMock())
        windows = importlib.import_module("xlwings._xlwindows")
        patch.setattr(xlwings, "_xlwindows", windows, raising=False)
        windows.Range = lambda xl=None: types.SimpleNamespace(api=xl, address="$A$1")
        windows.is_range_instance = lambda _: False
        patch.setitem(xlwings.engines.engines_by_name, "excel", xlwings.Engine(impl=windows.engine))
        yield importlib.import_module("xlwings.udfs")
        for name in real:
            sys.modules.pop(name, None)


@pytest.fixture(scope="module")
def functions(udfs):
    module = types.ModuleType("doubler_excel_under_test")
    module.__file__ = __file__
    sys.modules[module.__name__] = module
    excel_functions.register(vars(module), udfs.xlfunc, udfs.xlarg)
    yield module
    del sys.modules[module.__name__]


@pytest.fixture(scope="module")
def vba(udfs, functions):
    return vba_module(functions, udfs.generate_vba_wrapper)


def test_every_function_is_registered_with_its_help_and_none_is_volatile(functions):
    for host in served():
        info = getattr(functions, host.name).__xlfunc__
        assert info["name"] == host.name
        assert info["ret"]["doc"] == host.help
        assert [a["doc"] for a in info["args"]] == [a.help for a in host.arguments]
        assert [a["name"] for a in info["args"] if "optional" in a] == [
            name for name, a in zip(vba_names(host), host.arguments, strict=True) if a.optional
        ]
        assert not info["volatile"]
        assert info["category"] == "doubler"
    assert set(catalogue.names()) < {host.name for host in served()}


def test_required_arguments_come_before_optional_ones_in_the_whole_catalogue():
    for host in served():
        optional = [argument.optional for argument in host.arguments]
        assert optional == sorted(optional)


def test_the_generated_vba_is_sound_for_every_function(vba):
    heads = re.findall(r"(?m)^Function (\w+)\((.*?)\)", vba)
    assert {name for name, _ in heads} == {host.name for host in served()}
    for name, arguments in heads:
        names = [argument.removeprefix("Optional ").casefold() for argument in arguments.split(", ")]
        assert len(names) == len(set(names)) <= 60, name
        for argument in names:
            assert re.fullmatch(r"[a-z][a-z0-9_]{0,254}", argument), name
            assert argument not in RESERVED, name
    assert max(map(len, vba.splitlines())) < 1023
    assert vba.isascii()


def test_a_failed_call_ends_as_an_error_value_and_never_as_text(vba):
    assert "Err.Description" not in vba
    assert vba.count("= CVErr(xlErrValue)") == len(served()) + 1
    assert vba.count("= DoublerCells(XLPy.CallUDF(") == 2 * len(served())


def test_vba_that_is_not_what_is_known_is_refused(udfs, functions):
    with pytest.raises(InputError, match="xlwings"):
        corrected("Function A()\n  A = XLPy.CallUDF(1)\n  Exit Function\nEnd Function\n")


def call(udfs, functions, name, *arguments):
    info = getattr(functions, name).__xlfunc__
    missing = [-2147352572] * (len(info["args"]) - len(arguments))
    return udfs.call_udf(functions.__name__, name, (*arguments, *missing))


def test_a_call_through_xlwings_gives_the_value(udfs, functions):
    assert call(udfs, functions, "STRESS_AXIAL", "12 kN", "150 mm^2", "MPa") == [[80.0]]


def test_empty_cells_errors_and_ranges_come_through_xlwings_as_what_they_are(udfs, functions):
    not_available = -2146826246
    pairs = ((12.0, "kN"), (24.0, "kN"))
    assert call(udfs, functions, "STRESS_AXIAL", pairs, "150 mm^2", "MPa") == [[80.0], [160.0]]
    assert call(udfs, functions, "STRESS_AXIAL", not_available, "150 mm^2", "MPa") == [[MARK + "#N/A"]]
    assert call(udfs, functions, "STRESS_AXIAL", None, 150.0, "N-mm") == [[MARK + "#VALUE!"]]
    headed = (("kN",), (1.5,), (None,), (not_available,))
    assert call(udfs, functions, "STRESS_AXIAL", headed, "150 mm^2", "MPa") == [
        [10.0],
        [MARK + "#VALUE!"],
        [MARK + "#N/A"],
    ]


def test_an_error_goes_to_excel_marked_and_its_reason_is_told(udfs, functions):
    assert call(udfs, functions, "STRESS_AXIAL", "12 kN", "0 mm^2", "MPa") == [[MARK + "#NUM!"]]
    [[reason]] = call(udfs, functions, "UNIT_REASON", "STRESS_AXIAL", "12 kN", "0 mm^2", "MPa")
    assert "area must be positive" in reason


def test_cells_of_excel_are_read_as_what_they_are():
    import datetime
    from decimal import Decimal

    given = [[Decimal("12.5"), None, "#N/A", True, datetime.datetime(2024, 1, 2)]]
    assert excel_functions.from_excel(given) == [[12.5, None, ErrorValue.NA, True, "the date 2024-01-02T00:00:00"]]
    assert excel_functions.to_excel([[float("nan"), ErrorValue.DIV0, None]]) == [[MARK + "#NUM!", MARK + "#DIV/0!", ""]]


def test_every_function_in_every_form_equals_the_python_engine(functions):
    for known in conformance.calls():
        given = [[list(row) for row in a] if a is not None else None for a in known.arguments]
        shown = getattr(functions, known.function)(*given)
        grid = [[ErrorValue(v[1:]) if isinstance(v, str) and v.startswith(MARK) else v for v in row] for row in shown]
        assert not conformance.differences(grid, known)


def test_elsewhere_than_on_windows_excel_is_refused_with_the_way_out(tmp_path, monkeypatch):
    monkeypatch.setattr(sys, "platform", "linux")
    with pytest.raises(InputError, match="doubler host calc install"):
        excel_commands.run("install", tmp_path)
    report = excel_commands.run("status", tmp_path)
    assert not report.right
    assert all(finding.cure for finding in report.findings if not finding.right)


def test_a_vba_module_of_another_catalogue_is_named_with_its_cure(tmp_path, vba):
    path = excel_commands.module_path(tmp_path)

    def module():
        return next(f for f in excel_commands.run("status", tmp_path).findings if f.what == "VBA module")

    assert "doubler host excel install" in module().cure
    path.write_text(vba, encoding="ascii")
    assert module().right
    path.write_text(vba.replace("Function STRESS_AXIAL(", "Function STRESS_OTHER("), encoding="ascii")
    assert not module().right
    assert "STRESS_AXIAL" in module().found
