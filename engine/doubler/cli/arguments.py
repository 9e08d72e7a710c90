"""The verbs and their options, with an example each."""

from __future__ import annotations

import argparse

from doubler import __version__

CAUTION = (
    "doubler is an aid to calculation and checking. It does not replace the judgement of a qualified engineer, the "
    "applicable codes and regulations, or an independent check by licensed practice where that is required."
)


def parser() -> argparse.ArgumentParser:
    """Return the parser of the whole command line."""
    top = argparse.ArgumentParser(
        prog="doubler",
        description="Unit-aware stress worksheet functions, filled calc workbooks, and their independent check.",
        epilog=CAUTION,
    )
    top.add_argument("--version", action="version", version=f"doubler {__version__}")
    verbs = top.add_subparsers(dest="verb", metavar="VERB", required=True)

    def verb(name: str, summary: str, example: str) -> argparse.ArgumentParser:
        return verbs.add_parser(
            name,
            help=summary,
            description=summary[0].upper() + summary[1:] + ".",
            epilog=f"Example:\n  {example}",
            formatter_class=argparse.RawDescriptionHelpFormatter,
        )

    p = verb("demo", "run the main job on shipped, invented data", "doubler demo --out demo_out")
    p.add_argument("--out", default="demo_out", metavar="DIR", help="folder for the results (default: demo_out)")

    p = verb("eval", "evaluate one formula", """doubler eval '=STRESS_AXIAL("12 kN","150 mm^2","MPa")'""")
    p.add_argument("formula", help="as typed in a cell, native functions included")
    p.add_argument("--json", action="store_true", help="print the rows and the reasons as JSON")

    p = verb("functions", "list the worksheet functions, or show one", "doubler functions STRESS_AXIAL")
    p.add_argument("name", nargs="?", help="a function, or a category such as STRESS_")
    p.add_argument("--json", action="store_true", help="print a list of objects")

    p = verb("fill", "fill one workbook a load case, and a summary", "doubler fill strap.xlsx cases.csv --out filled")
    p.add_argument("template", help="any .xlsx or .xlsm")
    p.add_argument("cases", help="table of load cases: .csv, .parquet or .xlsx")
    p.add_argument("--out", required=True, metavar="DIR", help="folder for the filled workbooks and summary.xlsx")
    p.add_argument("--fresh", action="store_true", help="write every workbook anew, also those already there")
    p.add_argument("--json", action="store_true", help="print the envelope as JSON")

    p = verb(
        "sweep", "evaluate every case into one table", "doubler sweep shaft.xlsx cases.parquet --out results.parquet"
    )
    p.add_argument("template", help="any .xlsx or .xlsm")
    p.add_argument("cases", help="table of load cases: .csv, .parquet or .xlsx")
    p.add_argument("--out", required=True, metavar="RESULTS", help="a .parquet, .csv or .xlsx file")
    p.add_argument("--scheduler", metavar="ADDRESS", help="share the work over a dask scheduler (extra 'cluster')")
    p.add_argument("--json", action="store_true", help="print the envelope as JSON")

    p = verb(
        "size",
        "solve one input so that every case meets the target",
        'doubler size strap.xlsx --vary thickness --between 2 12 --target "ms_ultimate >= 0"',
    )
    p.add_argument("template", help="any .xlsx or .xlsm")
    p.add_argument("--vary", required=True, metavar="NAME", help="the input to solve for")
    p.add_argument("--between", required=True, nargs=2, metavar=("A", "B"), help="its smallest and largest value")
    p.add_argument("--target", required=True, metavar="TARGET", help='an output and its bound, "NAME >= 0"')
    p.add_argument("--cases", metavar="CASES", help="table of load cases; the answer then serves them all")
    p.add_argument("--json", action="store_true", help="print the answer as JSON")

    p = verb("check", "check workbooks", "doubler check wing_lug.xlsx --record record")
    p.add_argument("books", nargs="+", metavar="BOOK", help="workbooks to check")
    p.add_argument("--record", metavar="DIR", help="write the check record there")
    p.add_argument("--json", metavar="FILE", help="write the findings as JSON; - prints them")
    p.add_argument("--mended", metavar="FILE", help="write a copy with the mends that are beyond doubt, marked")
    p.add_argument("--policy", metavar="FILE", help="the policy file (default: doubler.toml beside the workbook)")
    p.add_argument("--against", metavar="OLD", help="an earlier revision: say what changed, and which findings")
    p.add_argument("--second", action="store_true", help="let a second, independent engine recalculate too")

    p = verb("explain", "show the chain behind one cell as a hand calculation", "doubler explain strap.xlsx Strap!D30")
    p.add_argument("book", help="a workbook")
    p.add_argument("cell", help="an address such as Sheet1!C5, or a defined name")
    p.add_argument("--json", action="store_true", help="print the steps as JSON")
    p.add_argument("--markdown", action="store_true", help="print Markdown")

    p = verb("host", "install, remove or test the functions in a spreadsheet program", "doubler host calc install")
    p.add_argument("program", choices=["excel", "calc"])
    p.add_argument("action", choices=["install", "remove", "status", "test"])
    p.add_argument("--profile", metavar="DIR", help="another user profile than the program's own")
    p.add_argument("--json", action="store_true", help="print what was found as JSON")
    return top
