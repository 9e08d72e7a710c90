"""Which unit rule each native worksheet function follows."""

from __future__ import annotations

from fractions import Fraction

from doubler.workbook import unit_fits as fits
from doubler.workbook import unit_lookups as lookups
from doubler.workbook import unit_rules as rules

_BY_RULE: dict[rules.Rule, str] = {
    rules.same: "SUM MIN MAX AVERAGE MEDIAN MINA MAXA AVERAGEA MODE MODE.SNGL GEOMEAN HARMEAN UNION",
    rules.first: (
        "ABS INT LARGE SMALL PERCENTILE PERCENTILE.INC PERCENTILE.EXC QUARTILE QUARTILE.INC QUARTILE.EXC "
        "TRIMMEAN EVEN ODD N VALUE NUMBERVALUE SINGLE ANCHORARRAY"
    ),
    rules.rounded: "ROUND ROUNDUP ROUNDDOWN TRUNC FIXED.NUMBER",
    rules.second: "SUBTOTAL AGGREGATE",
    rules.to_multiple: "MOD CEILING FLOOR MROUND CEILING.MATH FLOOR.MATH CEILING.PRECISE FLOOR.PRECISE ISO.CEILING",
    rules.ratio: (
        "EXP SINH COSH TANH ASINH ACOSH ATANH ERF ERFC ERF.PRECISE ERFC.PRECISE GAMMA GAMMALN "
        "NORMSDIST NORMSINV NORM.S.INV FACT FACTDOUBLE COMBIN COMBINA PERMUT PERMUTATIONA GCD LCM BESSELJ "
        "BESSELI BESSELK BESSELY GAMMALN.PRECISE NORM.S.DIST COTH SECH CSCH ACOTH FISHER FISHERINV CHISQ.INV "
        "CHISQ.DIST T.INV T.INV.2T TINV F.INV FINV CHIINV BINOMDIST"
    ),
    rules.logarithm: "LN LOG LOG10",
    rules.angle_in: "SIN COS TAN COT SEC CSC",
    rules.angle_out: "ASIN ACOS ATAN ACOT",
    rules.angle_of_two: "ATAN2",
    rules.to_radians: "RADIANS",
    rules.to_degrees: "DEGREES",
    rules.number: (
        "COUNT COUNTA COUNTBLANK ROW COLUMN ROWS COLUMNS SIGN RAND RANDBETWEEN TRUE FALSE TODAY NOW DATE TIME "
        "YEAR MONTH DAY HOUR MINUTE SECOND WEEKDAY WEEKNUM DATEVALUE TIMEVALUE DAYS DAYS360 EDATE EOMONTH "
        "NETWORKDAYS WORKDAY YEARFRAC DATEDIF LEN FIND SEARCH CODE UNICODE TYPE ERROR.TYPE SHEET SHEETS "
        "SEQUENCE PERCENTRANK PERCENTRANK.INC AREAS MUNIT SKEW KURT ISOWEEKNUM HEX2DEC BIN2DEC DEC2HEX DEC2BIN "
        "FREQUENCY RANDARRAY"
    ),
    rules.pi: "PI",
    rules.not_available: "NA",
    rules.times_pi: "SQRTPI",
    rules.rooted(Fraction(1, 2)): "SQRT",
    rules.power_sum(2): "SUMSQ VAR VARP VAR.S VAR.P VARA VARPA DEVSQ",
    rules.spread: "STDEV STDEVP STDEV.S STDEV.P STDEVA STDEVPA AVEDEV CONFIDENCE CONFIDENCE.NORM",
    rules.raised: "POWER",
    rules.product: "PRODUCT",
    rules.sum_of_products: "SUMPRODUCT",
    rules.sum_of_squares_between: "SUMXMY2 SUMX2MY2 SUMX2PY2",
    rules.quotient: "QUOTIENT",
    rules.inverse: "MINVERSE",
    rules.determinant: "MDETERM",
    rules.text: (
        "TEXT FIXED DOLLAR LEFT RIGHT MID TRIM CLEAN SUBSTITUTE REPLACE UPPER LOWER PROPER CONCATENATE CONCAT "
        "TEXTJOIN REPT CHAR UNICHAR T ADDRESS HYPERLINK CELL INFO FORMULATEXT ROMAN BASE DEC2OCT TEXTBEFORE "
        "TEXTAFTER UNIT_REASON"
    ),
    rules.logical: (
        "AND OR NOT XOR ISBLANK ISNUMBER ISTEXT ISERROR ISERR ISNA ISLOGICAL ISREF ISNONTEXT ISEVEN ISODD "
        "ISFORMULA EXACT DELTA GESTEP"
    ),
    rules.branches(1): "IF CHOOSE",
    rules.branches(0): "IFERROR IFNA",
    rules.conditions: "IFS",
    rules.switched: "SWITCH",
    rules.let: "LET",
    rules.passed: "SORT SORTBY FILTER UNIQUE TAKE DROP CHOOSECOLS CHOOSEROWS TOCOL TOROW EXPAND WRAPROWS WRAPCOLS",
    rules.turned_over: "TRANSPOSE",
    rules.untraceable("takes its reference from a text or an offset"): "INDIRECT OFFSET",
    rules.untraceable("calls a function defined in the workbook"): "LAMBDA MAP REDUCE SCAN BYROW BYCOL MAKEARRAY",
    rules.untraceable("reads from outside the sheet's formulas"): "GETPIVOTDATA RTD WEBSERVICE CUBEVALUE",
    rules.untraceable("fits an exponential, whose units follow from the data only"): "LOGEST GROWTH",
    lookups.down_first_column: "VLOOKUP",
    lookups.along_first_row: "HLOOKUP",
    lookups.indexed: "INDEX",
    lookups.stacked: "HSTACK VSTACK",
    lookups.matched: "MATCH XMATCH",
    lookups.across_to: "XLOOKUP",
    lookups.looked_up: "LOOKUP",
    lookups.by_criteria: "SUMIF AVERAGEIF",
    lookups.by_many_criteria: "SUMIFS AVERAGEIFS MINIFS MAXIFS",
    lookups.counted_by_criteria: "COUNTIF COUNTIFS",
    fits.slope: "SLOPE",
    fits.intercept: "INTERCEPT STEYX",
    fits.line_fit: "LINEST",
    fits.forecast: "FORECAST FORECAST.LINEAR",
    fits.trend: "TREND",
    fits.correlation: "CORREL RSQ PEARSON",
    fits.covariance: "COVAR COVARIANCE.P COVARIANCE.S",
    fits.matrix_product: "MMULT",
    fits.standardised: "STANDARDIZE",
    lookups.ranked: "RANK RANK.EQ RANK.AVG",
    fits.converted: "CONVERT",
    fits.normal_probability: "NORMDIST NORM.DIST",
    fits.normal_quantile: "NORMINV NORM.INV",
}

RULES: dict[str, rules.Rule] = {name: rule for rule, names in _BY_RULE.items() for name in names.split()}
"""The unit rule of each native function, by its name in capitals."""
