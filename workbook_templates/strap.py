"""The tension strap with a pin joint."""

from __future__ import annotations

from calc_sheet import AT_LEAST_ONE, POSITIVE, CalcSheet, Given, Result, Row, choice

SHEET = "Strap"
_GERE = "Gere, Mechanics of Materials"
_MS = "allowable ÷ (safety factor × fitting factor × applied) − 1"

_INPUTS: list[Row] = [
    "Load and geometry",
    Given(
        "load_axial", "P", "Tension in the strap, limit load", 96.0, "kN", POSITIVE, "load case; tension only", "0.00"
    ),
    Given("width", "w", "Width of the strap at the pin", 80.0, "mm", POSITIVE, "drawing", "0.00"),
    Given(
        "thickness", "t", "Thickness of the strap", 16.0, "mm", POSITIVE, "drawing, minimum of the tolerance", "0.00"
    ),
    Given(
        "hole_diameter", "d", "Diameter of the hole", 32.2, "mm", POSITIVE, "drawing, maximum of the tolerance", "0.00"
    ),
    Given(
        "pin_diameter", "D", "Diameter of the pin", 32.0, "mm", POSITIVE, "drawing; not larger than the hole", "0.00"
    ),
    Given("edge_distance", "e", "Centre of the hole to the end of the strap", 50.0, "mm", POSITIVE, "drawing", "0.00"),
    Given(
        "shear_planes",
        "n",
        "Number of shear planes of the pin",
        2,
        "-",
        choice("1", "2"),
        "1: single shear; 2: fork and blade",
    ),
    "Allowables and factors",
    Given(
        "tensile_yield",
        "F_ty",
        "Yield strength of the strap",
        355.0,
        "MPa",
        POSITIVE,
        "invented data sheet of steel plate",
        "0.0",
    ),
    Given(
        "tensile_ultimate",
        "F_tu",
        "Ultimate strength of the strap",
        490.0,
        "MPa",
        POSITIVE,
        "invented data sheet of steel plate",
        "0.0",
    ),
    Given(
        "bearing_yield",
        "F_bry",
        "Bearing yield allowable of the strap",
        530.0,
        "MPa",
        POSITIVE,
        "the same, for this edge distance",
        "0.0",
    ),
    Given(
        "bearing_ultimate",
        "F_bru",
        "Bearing ultimate allowable of the strap",
        780.0,
        "MPa",
        POSITIVE,
        "the same, for this edge distance",
        "0.0",
    ),
    Given(
        "shear_yield",
        "F_sy",
        "Shear yield allowable of the strap",
        205.0,
        "MPa",
        POSITIVE,
        "F_ty ÷ √3, rounded",
        "0.0",
    ),
    Given(
        "shear_ultimate",
        "F_su",
        "Shear ultimate allowable of the strap",
        295.0,
        "MPa",
        POSITIVE,
        "invented data sheet of steel plate",
        "0.0",
    ),
    Given(
        "pin_shear_yield",
        "F_sy,pin",
        "Shear yield allowable of the pin",
        400.0,
        "MPa",
        POSITIVE,
        "invented data sheet of pin steel",
        "0.0",
    ),
    Given(
        "pin_shear_ultimate",
        "F_su,pin",
        "Shear ultimate allowable of the pin",
        560.0,
        "MPa",
        POSITIVE,
        "invented data sheet of pin steel",
        "0.0",
    ),
    Given(
        "factor_yield", "FS_y", "Safety factor for yield", 1.15, "-", AT_LEAST_ONE, "the project's design rules", "0.00"
    ),
    Given(
        "factor_ultimate",
        "FS_u",
        "Safety factor for ultimate",
        1.5,
        "-",
        AT_LEAST_ONE,
        "the project's design rules",
        "0.00",
    ),
    Given(
        "factor_fitting",
        "FF",
        "Fitting factor",
        1.15,
        "-",
        AT_LEAST_ONE,
        "the project's design rules; all items of the joint",
        "0.00",
    ),
]

_SECTION: list[Row] = [
    "Areas",
    Result(
        "net_width",
        "w_n",
        "Net width at the pin",
        "=IF({width.v}>{hole_diameter.v},{width.v}-{hole_diameter.v},NA())",
        "mm",
        None,
        "width − hole; the hole must fit in the width",
        "0.00",
    ),
    Result(
        "shear_length",
        "a",
        "Length of a shear-out plane",
        "=IF({edge_distance.v}>{hole_diameter.v}/2,{edge_distance.v}-{hole_diameter.v}/2,NA())",
        "mm",
        None,
        "edge distance − half the hole: common practice, the shortest plane",
        "0.00",
    ),
    Result(
        "bearing_diameter",
        "D_b",
        "Diameter in bearing",
        "=IF({pin_diameter.v}<={hole_diameter.v},{pin_diameter.v},NA())",
        "mm",
        None,
        "the pin's; no result for a pin larger than its hole",
        "0.00",
    ),
    Result(
        "area_net",
        "A_n",
        "Net area",
        '=SECTION_RECTANGLE_AREA({net_width},{thickness},"mm^2")',
        "mm²",
        "=({width}-{hole_diameter})*{thickness}",
        "(width − hole) × thickness",
        "0.0",
    ),
    Result(
        "area_shear_out",
        "A_so",
        "Area of one shear-out plane",
        '=SECTION_RECTANGLE_AREA({shear_length},{thickness},"mm^2")',
        "mm²",
        "=({edge_distance}-{hole_diameter}/2)*{thickness}",
        "(edge distance − half the hole) × thickness",
        "0.0",
    ),
]

_STRESS: list[Row] = [
    "Stresses at limit load",
    Result(
        "net_stress",
        "σ_n",
        "Tension in the net section",
        '=STRESS_AXIAL({load_axial},{area_net},"MPa")',
        "MPa",
        "={load_axial}*1000/{area_net}",
        f"load ÷ net area; {_GERE}, 1.2",
        "0.00",
    ),
    Result(
        "bearing_stress",
        "σ_br",
        "Bearing of the pin on the hole",
        '=STRESS_BEARING({load_axial},{bearing_diameter},{thickness},"MPa")',
        "MPa",
        "={load_axial}*1000/({pin_diameter}*{thickness})",
        f"load ÷ (pin diameter × thickness); {_GERE}, 1.6",
        "0.00",
    ),
    Result(
        "shear_out_stress",
        "τ_so",
        "Shear-out of the end",
        '=STRESS_DIRECT_SHEAR({load_axial},{area_shear_out},2,"MPa")',
        "MPa",
        "={load_axial}*1000/(2*{area_shear_out})",
        f"load ÷ (two planes × area); {_GERE}, 1.6",
        "0.00",
    ),
    Result(
        "pin_shear_stress",
        "τ_pin",
        "Shear of the pin",
        '=STRESS_PIN_SHEAR({load_axial},{pin_diameter},{shear_planes.v},"MPa")',
        "MPa",
        "={load_axial}*1000/({shear_planes}*PI()/4*{pin_diameter}^2)",
        f"load ÷ (planes × pin's area); bending of the pin left out; {_GERE}, 1.6",
        "0.00",
    ),
]


def _margins() -> list[Row]:
    rows: list[Row] = [f"Margins of safety: {_MS}"]
    items = (
        ("net", "net section", "net_stress", "tensile"),
        ("bearing", "bearing", "bearing_stress", "bearing"),
        ("shear_out", "shear-out", "shear_out_stress", "shear"),
        ("pin", "pin shear", "pin_shear_stress", "pin_shear"),
    )
    for short, words, stress, allowable in items:
        for kind in ("yield", "ultimate"):
            factor = f"factor_{kind}"
            strong = f"{allowable}_{kind}"
            rows.append(
                Result(
                    f"ms_{short}_{kind}",
                    f"MS_{'y' if kind == 'yield' else 'u'}",
                    f"{words.capitalize()}, {kind}",
                    f"=MARGIN_{kind.upper()}({{{stress}}},{{{strong}}},{{{factor}.v}},{{factor_fitting.v}})",
                    "-",
                    f"={{{strong}}}/({{{factor}}}*{{factor_fitting}}*{{{stress}}})-1",
                    f"{kind} allowable against {words} stress",
                    "+0.000;-0.000;0.000",
                    margin=True,
                    difference="absolute",
                )
            )
    return rows


def build() -> CalcSheet:
    """Return the sheet of the tension strap."""
    sheet = CalcSheet(
        SHEET,
        "Tension strap with pin joint",
        "Retrieval hoist of a tidal-stream turbine (an invented machine): strap between hook block and nacelle eye",
        "Hoist strap S-14",
        "as shipped",
    )
    sheet.lay(_INPUTS + _SECTION + _STRESS)
    margins = _margins()
    sheet.lay(margins)
    first = sheet.rows["ms_net_yield"]
    last = sheet.rows["ms_pin_ultimate"]
    sheet.lay(
        [
            Result(
                "ms_minimum",
                "MS_min",
                "Lowest margin",
                f"=MARGIN_ENVELOPE(C{first}:C{last})",
                "-",
                f"=MIN(E{first}:E{last})",
                "lowest of the eight above",
                "+0.000;-0.000;0.000",
                margin=True,
                difference="absolute",
            ),
            Result(
                "governing",
                "",
                "Item that governs",
                f"=MARGIN_GOVERNING(C{first}:C{last},B{first}:B{last})",
                "",
                f"=INDEX(B{first}:B{last},MATCH(MIN(E{first}:E{last}),E{first}:E{last},0))",
                "first item with the lowest margin",
                "General",
                difference="none",
            ),
        ]
    )
    sheet.finish()
    return sheet
