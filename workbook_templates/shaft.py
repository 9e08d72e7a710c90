"""The shaft in bending, torsion and axial load: strength at three points, stiffness against limits."""

from __future__ import annotations

from calc_sheet import AT_LEAST_ONE, NOT_NEGATIVE, NUMBER, POSITIVE, CalcSheet, Given, Result, Row

SHEET = "Shaft"
_GERE = "Gere, Mechanics of Materials"
_MARGIN = "+0.000;-0.000;0.000"
_RULES = "the project's design rules"
_DATA = "invented data sheet of shaft steel"

_INPUTS: list[Row] = [
    "Loads and geometry",
    Given("load_transverse", "F", "Transverse force at mid-span, limit load", 42.0, "kN", NUMBER, "load case", "0.00"),
    Given("load_axial", "N", "Axial force, limit load", 15.0, "kN", NUMBER, "load case; tension positive", "0.00"),
    Given("torque", "T", "Torque, limit load", 3.6, "kN·m", NUMBER, "load case", "0.00"),
    Given("outer_diameter", "D", "Outer diameter", 78.0, "mm", POSITIVE, "drawing, minimum", "0.00"),
    Given("inner_diameter", "d", "Inner diameter; 0 for solid", 30.0, "mm", NOT_NEGATIVE, "drawing, maximum", "0.00"),
    Given("span", "L", "Distance between the bearings", 640.0, "mm", POSITIVE, "drawing; simply supported", "0.0"),
    Given("length_torsion", "L_t", "Length in torsion", 480.0, "mm", POSITIVE, "drawing; coupling to drum", "0.0"),
    "Material, factors and limits",
    Given("young_modulus", "E", "Young's modulus", 206.0, "GPa", POSITIVE, _DATA, "0.0"),
    Given("shear_modulus", "G", "Shear modulus", 79.5, "GPa", POSITIVE, _DATA, "0.0"),
    Given("tensile_yield", "F_ty", "Yield strength", 520.0, "MPa", POSITIVE, _DATA, "0.0"),
    Given("tensile_ultimate", "F_tu", "Ultimate strength", 720.0, "MPa", POSITIVE, _DATA, "0.0"),
    Given("factor_yield", "FS_y", "Safety factor for yield", 1.25, "-", AT_LEAST_ONE, _RULES, "0.00"),
    Given("factor_ultimate", "FS_u", "Safety factor for ultimate", 1.6, "-", AT_LEAST_ONE, _RULES, "0.00"),
    Given("factor_dynamic", "f_dyn", "Dynamic factor on the loads", 1.3, "-", AT_LEAST_ONE, "start and stop", "0.00"),
    Given("deflection_limit", "δ_lim", "Limit of the deflection", 1.0, "mm", POSITIVE, f"{_RULES}; no factor", "0.00"),
    Given("twist_limit", "φ_lim", "Limit of the twist", 0.5, "deg", POSITIVE, f"{_RULES}; no factor", "0.00"),
    Given("margin_cap", "MS_cap", "Largest margin that is reported", 20.0, "-", POSITIVE, "stands for no load", "0.0"),
]

_DIAMETERS = "{outer_diameter},{inner_diameter}"
_GUARD = "=IF({{outer_diameter}}>{{inner_diameter}},PI()/{0}*({{outer_diameter}}^{1}-{{inner_diameter}}^{1}),NA())"
_RING = f"{_GERE}, appendix on plane areas"
_STRENGTH: list[Row] = [
    "Section",
    Result("area", "A", "Area", f'=SECTION_ROUND_AREA({_DIAMETERS},"mm^2")', "mm²", _GUARD.format(4, 2),
           f"π/4 × (D² − d²); {_RING}", "0.0"),
    Result("second_moment", "I", "Second moment of area", f'=SECTION_ROUND_SECOND_MOMENT({_DIAMETERS},"mm^4")', "mm⁴",
           _GUARD.format(64, 4), f"π/64 × (D⁴ − d⁴); {_RING}", "0"),
    Result("section_modulus", "W", "Section modulus", f'=SECTION_ROUND_MODULUS({_DIAMETERS},"mm^3")', "mm³",
           "={second_moment}/({outer_diameter}/2)", "second moment ÷ outer radius", "0"),
    Result("torsion_constant", "J", "Torsion constant", f'=SECTION_ROUND_TORSION_CONSTANT({_DIAMETERS},"mm^4")', "mm⁴",
           "=2*{second_moment}", "π/32 × (D⁴ − d⁴), twice the second moment", "0"),
    "Stresses at limit load",
    Result("bending_moment", "M", "Bending moment at mid-span", "={load_transverse.v}*{span.v}/4/1000", "kN·m", None,
           "force × span ÷ 4; simply supported", "0.000"),
    Result("axial_stress", "σ_a", "Axial stress", '=STRESS_AXIAL({load_axial},{area},"MPa")', "MPa",
           "={load_axial}*1000/{area}", f"axial force ÷ area; {_GERE}, 1.2", "0.00"),
    Result("bending_stress", "σ_b", "Bending stress, outer fibre",
           '=STRESS_BENDING_MODULUS({bending_moment},{section_modulus},"MPa")', "MPa",
           "={load_transverse}*1000*{span}/4/{section_modulus}", f"moment ÷ section modulus; {_GERE}, 5.5", "0.00"),
    Result("torsion_stress", "τ_t", "Torsional shear stress, surface",
           f'=STRESS_TORSION_ROUND({{torque}},{_DIAMETERS},"MPa")', "MPa",
           "={torque}*1000000*{outer_diameter}/2/{torsion_constant}",
           f"torque × outer radius ÷ torsion constant; {_GERE}, 3.3", "0.00"),
    Result("shear_stress", "τ_v", "Transverse shear stress, neutral axis",
           f'=STRESS_SHEAR_ROUND({{shear_force}},{_DIAMETERS},"MPa")', "MPa",
           "={load_transverse}*1000/2*4/(3*{area})*({outer_diameter}^2+{outer_diameter}*{inner_diameter}"
           "+{inner_diameter}^2)/({outer_diameter}^2+{inner_diameter}^2)",
           f"V ÷ A × 4/3 × (D² + D d + d²) ÷ (D² + d²); {_GERE}, 5.9", "0.00"),
]  # fmt: skip

_SHEAR_FORCE = Result("shear_force", "V", "Shear force beside mid-span", "={load_transverse.v}/2", "kN", None,
                      "half the force", "0.00")  # fmt: skip


def _von_mises(name: str, words: str, ours: str, normal: str, shear: str, source: str) -> list[Row]:
    # Our function takes pairs of cells, so each point's normal and shear stress stand in rows of their own.
    return [
        Result(f"{name}_normal", "σ", f"{words}: normal stress", f"={ours}", "MPa", f"={normal}", source, "0.00"),
        Result(f"{name}_equivalent", "σ_vM", f"{words}: von Mises",
               f'=STRESS_VON_MISES({{{name}_normal}},"0 MPa",{{{shear}}},"MPa")', "MPa",
               f"=SQRT({{{name}_normal}}^2+3*{{{shear}}}^2)", "√(σ² + 3 τ²); Shigley's, 5-5", "0.00"),
    ]  # fmt: skip


def _combined() -> list[Row]:
    axial, bending = "{axial_stress.v}", "{bending_stress.v}"
    return [
        "Combined stress at three points",
        *_von_mises("top", "Fibre in bending tension", f"{axial}+{bending}", "{axial_stress}+{bending_stress}",
                    "torsion_stress", "axial + bending"),
        *_von_mises("bottom", "Fibre in bending compression", f"{axial}-{bending}", "{axial_stress}-{bending_stress}",
                    "torsion_stress", "axial − bending"),
        Result("middle_shear", "τ", "Neutral axis: shear stress", "=ABS({torsion_stress.v})+ABS({shear_stress.v})",
               "MPa", "=ABS({torsion_stress})+ABS({shear_stress})", "|torsion| + |transverse|, where they add", "0.00"),
        Result("middle_equivalent", "σ_vM", "Neutral axis: von Mises",
               '=STRESS_VON_MISES({axial_stress},"0 MPa",{middle_shear},"MPa")', "MPa",
               "=SQRT({axial_stress}^2+3*{middle_shear}^2)", "√(σ² + 3 τ²); Shigley's, 5-5", "0.00"),
        Result("equivalent_stress", "σ_eq", "Largest of the three",
               "=MAX({top_equivalent.v},{bottom_equivalent.v},{middle_equivalent.v})", "MPa",
               "=MAX({top_equivalent},{bottom_equivalent},{middle_equivalent})", "largest von Mises stress", "0.00"),
    ]  # fmt: skip


_STIFFNESS: list[Row] = [
    "Stiffness at limit load, without the dynamic factor",
    Result("bending_stiffness", "E I", "Bending stiffness",
           '=STIFFNESS_BENDING({second_moment},{young_modulus},"kN*m^2")', "kN·m²",
           "={young_modulus}*{second_moment}/1000000", f"E × I; {_GERE}, 5.5", "0.0"),
    Result("midspan_stiffness", "k_b", "Stiffness at mid-span",
           '=STIFFNESS_MIDSPAN({span},{second_moment},{young_modulus},"kN/mm")', "kN/mm",
           "=48*{young_modulus}*{second_moment}/{span}^3", f"48 E I ÷ L³; {_GERE}, 9.3", "0.000"),
    Result("deflection", "δ", "Deflection at mid-span",
           '=STIFFNESS_MIDSPAN_DEFLECTION({load_transverse},{span},{second_moment},{young_modulus},"mm")', "mm",
           "={load_transverse}/{midspan_stiffness}", "force ÷ stiffness; bending alone, a slender shaft", "0.0000"),
    Result("torsional_stiffness", "k_t", "Torsional stiffness",
           '=STIFFNESS_TORSIONAL({length_torsion},{torsion_constant},{shear_modulus},"kN*m/rad")', "kN·m/rad",
           "={shear_modulus}*{torsion_constant}/{length_torsion}/1000", f"G J ÷ L_t; {_GERE}, 3.3", "0.0"),
    Result("twist", "φ", "Twist",
           '=STIFFNESS_TWIST({torque},{length_torsion},{torsion_constant},{shear_modulus},"deg")', "deg",
           "=DEGREES({torque}/{torsional_stiffness})", "torque ÷ stiffness, in degrees", "0.0000"),
]  # fmt: skip


def _margins() -> list[Row]:
    rows: list[Row] = ["Margins of strength: allowable ÷ (safety factor × dynamic factor × applied) − 1"]
    for kind in ("yield", "ultimate"):
        strong, factor = f"{{tensile_{kind}", f"{{factor_{kind}"
        rows.append(
            Result(
                f"ms_{kind}",
                f"MS_{kind[0]}",
                f"{kind.capitalize()}, von Mises",
                f"=MARGIN_{kind.upper()}({{equivalent_stress}},{strong}}},{factor}.v}},,{{factor_dynamic.v}},{{margin_cap.v}})",
                "-",
                "=IF({equivalent_stress}=0,{margin_cap},MIN({margin_cap},"
                f"{strong}}}/({factor}}}*{{factor_dynamic}}*{{equivalent_stress}})-1))",
                f"{kind} strength against the largest von Mises stress",
                _MARGIN,
                margin=True,
                difference="absolute",
            )
        )
    rows.append("Margins of stiffness: limit ÷ deflection − 1; no margins of strength")
    for name, symbol, words in (("deflection", "δ", "Deflection"), ("twist", "φ", "Twist")):
        rows.append(
            Result(
                f"ms_{name}",
                f"MS_{symbol}",
                f"{words} against its limit",
                f"=MARGIN_STIFFNESS({{{name}}},{{{name}_limit}},,{{margin_cap.v}})",
                "-",
                f"=IF({{{name}}}=0,{{margin_cap}},MIN({{margin_cap}},{{{name}_limit}}/ABS({{{name}}})-1))",
                "kept apart from strength; common practice",
                _MARGIN,
                margin=True,
                difference="absolute",
            )
        )
    return rows


def build() -> CalcSheet:
    """Return the sheet of the shaft."""
    sheet = CalcSheet(
        SHEET,
        "Shaft in bending and torsion",
        "Retrieval hoist of a tidal-stream turbine (an invented machine): shaft of the rope drum",
        "Drum shaft D-02",
        "as shipped",
    )
    at = next(n for n, row in enumerate(_STRENGTH) if isinstance(row, Result) and row.name == "bending_moment")
    sheet.lay(
        [*_INPUTS, *_STRENGTH[: at + 1], _SHEAR_FORCE, *_STRENGTH[at + 1 :], *_combined(), *_STIFFNESS, *_margins()]
    )
    sheet.finish()
    return sheet
