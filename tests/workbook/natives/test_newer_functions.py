"""Functions that the spreadsheet program of the differential test does not know.

Expected values: computed by hand from the documented behaviour (function reference of Office Open XML's transitional
successors, common practice), each small enough to see.
"""

from typing import Any

import numpy as np
import pytest

from doubler.workbook.evaluate import evaluate_formula
from workbook.evaluated_books import run, shown


@pytest.mark.parametrize(
    ("formula", "rows"),
    [
        ("=SEQUENCE(2,3)", [[1.0, 2.0, 3.0], [4.0, 5.0, 6.0]]),
        ("=SEQUENCE(3,1,10,-2)", [[10.0], [8.0], [6.0]]),
        ("=SEQUENCE(2,,5)", [[5.0], [6.0]]),
        ("=SORT({3;1;2})", [[1.0], [2.0], [3.0]]),
        ('=SORT({"b",2;"a",9},1)', [["a", 9.0], ["b", 2.0]]),
        ("=SORT({3;1;2},1,-1)", [[3.0], [2.0], [1.0]]),
        ("=SORT({3,1,2},1,1,TRUE)", [[1.0, 2.0, 3.0]]),
        ('=SORT({"x";3;TRUE})', [[3.0], ["x"], [True]]),
        ("=SORTBY({1;2;3},{30;10;20})", [[2.0], [3.0], [1.0]]),
        ("=UNIQUE({1;2;1;3})", [[1.0], [2.0], [3.0]]),
        ('=UNIQUE({"a";"A";"b"})', [["a"], ["b"]]),
        ("=UNIQUE({1;2;1},FALSE,TRUE)", [[2.0]]),
        ("=FILTER({1;2;3;4},{1;0;1;0})", [[1.0], [3.0]]),
        ('=FILTER({1;2},{0;0},"none")', [["none"]]),
        ("=FILTER({1,2,3},{1,0,1})", [[1.0, 3.0]]),
        ("=TAKE({1;2;3},2)", [[1.0], [2.0]]),
        ("=TAKE({1;2;3},-1)", [[3.0]]),
        ("=DROP({1;2;3},1)", [[2.0], [3.0]]),
        ("=HSTACK({1;2},{3;4})", [[1.0, 3.0], [2.0, 4.0]]),
        ("=VSTACK({1,2},{3,4})", [[1.0, 2.0], [3.0, 4.0]]),
        ("=CHOOSECOLS({1,2,3;4,5,6},3,1)", [[3.0, 1.0], [6.0, 4.0]]),
        ("=CHOOSEROWS({1,2;3,4;5,6},-1)", [[5.0, 6.0]]),
        ("=TOCOL({1,2;3,4})", [[1.0], [2.0], [3.0], [4.0]]),
        ("=TOROW({1,2;3,4})", [[1.0, 2.0, 3.0, 4.0]]),
        ("=LET(x,3,y,x+1,x*y)", [[12.0]]),
        ("=LET(a,{1,2,3},SUM(a))", [[6.0]]),
        ("=LAMBDA(x,y,x*10+y)(3,4)", [[34.0]]),
        ("=LET(f,LAMBDA(x,x^2),f(5))", [[25.0]]),
        ("=MAP({1,2,3},LAMBDA(x,x*x))", [[1.0, 4.0, 9.0]]),
        ("=MAP({1,2},{10,20},LAMBDA(a,b,a+b))", [[11.0, 22.0]]),
        ("=REDUCE(0,{1,2,3},LAMBDA(a,b,a+b))", [[6.0]]),
        ("=SCAN(0,{1,2,3},LAMBDA(a,b,a+b))", [[1.0, 3.0, 6.0]]),
        ("=BYROW({1,2;3,4},LAMBDA(r,SUM(r)))", [[3.0], [7.0]]),
        ("=BYCOL({1,2;3,4},LAMBDA(c,MAX(c)))", [[3.0, 4.0]]),
        ("=MAKEARRAY(2,2,LAMBDA(r,c,r*10+c))", [[11.0, 12.0], [21.0, 22.0]]),
        ('=XLOOKUP("b",{"a","b"},{1,2})', [[2.0]]),
        ('=XLOOKUP("z",{"a","b"},{1,2},"none")', [["none"]]),
        ("=XLOOKUP(2.5,{1,2,3},{10,20,30},,-1)", [[20.0]]),
        ("=XLOOKUP(2.5,{1,2,3},{10,20,30},,1)", [[30.0]]),
        ("=XLOOKUP(1,{1,2,1},{10,20,30},,0,-1)", [[30.0]]),
        ("=XLOOKUP(2,{1;2},{1,2;3,4})", [[3.0, 4.0]]),
        ('=XMATCH("b*",{"abc","bcd"},2)', [[2.0]]),
        ("=XMATCH(4,{1,3,5},1)", [[3.0]]),
        ('=TEXTBEFORE("a-b-c","-")', [["a"]]),
        ('=TEXTAFTER("a-b-c","-",2)', [["c"]]),
        ('=TEXTAFTER("a-b-c","-",-1)', [["c"]]),
        ("=MUNIT(2)", [[1.0, 0.0], [0.0, 1.0]]),
    ],
)
def test_value(formula: str, rows: list[list[Any]]) -> None:
    assert evaluate_formula(formula).grid == rows


@pytest.mark.parametrize(
    ("formula", "error"),
    [
        ("=FILTER({1;2},{0;0})", "#CALC!"),
        ("=FILTER({1;2;3},{1;0})", "#VALUE!"),
        ("=SORT({1;2},3)", "#VALUE!"),
        ("=SEQUENCE(0)", "#CALC!"),
        ('=XLOOKUP("z",{"a"},{1})', "#N/A"),
        ("=TAKE({1},0)", "#CALC!"),
        ('=TEXTBEFORE("abc","-")', "#N/A"),
        ("=LAMBDA(x,x)", "#CALC!"),
    ],
)
def test_refusal(formula: str, error: str) -> None:
    found = evaluate_formula(formula)
    assert str(found.grid[0][0]) == error
    assert found.reasons


def test_they_run_over_cases() -> None:
    cells = {"A1": 3, "A2": 1, "A3": 2, "B1": "=SUM(TAKE(SORT(A1:A3),2))", "B2": "=LET(m,MAX(A1:A3),m*2)"}
    cells |= {"B3": '=XLOOKUP(A1,A1:A3,A1:A3,"none",-1)', "B4": "=REDUCE(0,A1:A3,LAMBDA(a,b,a+b^2))"}
    found = run(cells, {"A1": np.array([3.0, 0.5, 9.0])})
    assert shown(found, "B1") == [3.0, 1.5, 3.0]
    assert shown(found, "B2") == [6.0, 4.0, 18.0]
    assert shown(found, "B4") == [14.0, 5.25, 86.0]
