"""The elastic constants of an isotropic material: two of them give all, and the others given are checked."""

from __future__ import annotations

from calc_sheet import POISSON, POSITIVE, CalcSheet, Given, Result, Row, choice

SHEET = "Constants"
_DATA = "invented data sheet of shaft steel"
_BASES = ("E and nu", "E and G", "E and K", "G and nu", "K and nu", "G and K")
_GERE = "Gere, Mechanics of Materials, 3.6"

_INPUTS: list[Row] = [
    "Constants as given",
    Given("basis", "", "The two that the others follow from", "E and nu", "", choice(*_BASES), "choice of a pair"),
    Given("young_modulus", "E", "Young's modulus", 206.0, "GPa", POSITIVE, _DATA, "0.000"),
    Given("poisson_ratio", "ν", "Poisson's ratio", 0.3, "-", POISSON, _DATA, "0.0000"),
    Given("shear_modulus", "G", "Shear modulus", 79.2, "GPa", POSITIVE, _DATA, "0.000"),
    Given("bulk_modulus", "K", "Bulk modulus", 172.0, "GPa", POSITIVE, _DATA, "0.000"),
    Given(
        "tolerance", "tol", "Largest deviation that counts as agreement", 0.01, "-", POSITIVE, "the project's", "0.000"
    ),
]


_E = ("{E}", "{E}", "{E}", "2*{G}*(1+{nu})", "3*{K}*(1-2*{nu})", "9*{K}*{G}/(3*{K}+{G})")
_NU = ("{nu}", "{E}/(2*{G})-1", "(3*{K}-{E})/(6*{K})", "{nu}", "{nu}", "(3*{K}-2*{G})/(2*(3*{K}+{G}))")


_LONG = {"E": "young_modulus", "nu": "poisson_ratio", "G": "shear_modulus", "K": "bulk_modulus"}
# Arguments of our functions by the pair: Young's modulus, Poisson's ratio, shear modulus, bulk modulus.
_ARGUMENTS = ("{E},{nu}", "{E},,{G}", "{E},,,{K}", ",{nu},{G}", ",{nu},,{K}", ",,{G},{K}")


def _named(text: str) -> str:
    for short, name in _LONG.items():
        text = text.replace("{" + short + "}", "{" + name + "}")
    return text


def _native(items: tuple[str, ...]) -> str:
    return _named("CHOOSE({basis_number}," + ",".join(items) + ")")


def _ours(function: str, unit: str) -> str:
    wanted = f',"{unit}"' if unit else ""
    calls = ",".join(f"{function}({_named(arguments)}{wanted})" for arguments in _ARGUMENTS)
    return f"=CHOOSE({{basis_number.v}},{calls})"


def _constants() -> list[Row]:
    pairs = '{{"' + '";"'.join(_BASES) + '"}}'
    ratio = _native(_NU)
    return [
        "Constants that follow from the pair",
        Result("basis_number", "", "Number of the pair in the list", f"=MATCH({{basis.v}},{pairs},0)", "-",
               f"=MATCH({{basis}},{pairs},0)", "place in the list of choices", "0"),
        Result("poisson_result", "ν", "Poisson's ratio", _ours("MODULUS_POISSON", ""), "-",
               f"=IF(AND({ratio}>-1,{ratio}<0.5),{ratio},NA())", "from the pair; between −1 and 0.5, else no result",
               "0.0000"),
        Result("young_result", "E", "Young's modulus", _ours("MODULUS_YOUNG", "GPa"), "GPa", f"={_native(_E)}",
               f"from the pair; {_GERE}", "0.000"),
        Result("shear_result", "G", "Shear modulus", _ours("MODULUS_SHEAR", "GPa"), "GPa",
               "={young_result}/(2*(1+{poisson_result}))", f"E ÷ (2 (1 + ν)); {_GERE}", "0.000"),
        Result("bulk_result", "K", "Bulk modulus", _ours("MODULUS_BULK", "GPa"), "GPa",
               "={young_result}/(3*(1-2*{poisson_result}))", "E ÷ (3 (1 − 2 ν)); Timoshenko, Goodier, chapter 1",
               "0.000"),
        Result("lame_result", "λ", "Lamé's first constant", _ours("MODULUS_LAME", "GPa"), "GPa",
               "={bulk_result}-2*{shear_result}/3", "K − 2 G ÷ 3; Timoshenko, Goodier, chapter 1", "0.000"),
        Result("p_wave_result", "M", "P-wave modulus", _ours("MODULUS_P_WAVE", "GPa"), "GPa",
               "={bulk_result}+4*{shear_result}/3", "K + 4 G ÷ 3, of a bar whose sides are held", "0.000"),
    ]  # fmt: skip


def _consistency() -> list[Row]:
    rows: list[Row] = ["Consistency of the constants as given"]
    items = (
        ("young", "E", "Young's modulus", "young_modulus"),
        ("shear", "G", "Shear modulus", "shear_modulus"),
        ("bulk", "K", "Bulk modulus", "bulk_modulus"),
    )
    for short, symbol, words, given in items:
        rows.append(
            Result(f"deviation_{short}", f"Δ{symbol} ÷ {symbol}", f"Deviation ratio: {words}",
                   f"={{{given}.v}}/{{{short}_result.v}}-1", "-", f"={{{given}}}/{{{short}_result}}-1",
                   "given ÷ what follows from the pair − 1", "0.0000", difference="absolute")
        )  # fmt: skip
    rows += [
        Result("deviation_poisson", "Δν", "Deviation: Poisson's ratio",
               "={poisson_ratio.v}-{poisson_result.v}", "-", "={poisson_ratio}-{poisson_result}",
               "given − what follows from the pair", "0.0000", difference="absolute"),
        Result("largest_deviation", "", "Largest deviation ratio, any sign",
               "=MAX(ABS({deviation_young.v}),ABS({deviation_shear.v}),ABS({deviation_bulk.v}),"
               "ABS({deviation_poisson.v}))",
               "-", "=MAX(ABS({deviation_young}),ABS({deviation_shear}),ABS({deviation_bulk}),"
               "ABS({deviation_poisson}))",
               "largest of the four by magnitude", "0.0000", difference="absolute"),
        Result("verdict", "", "Do the constants agree?",
               '=IF({largest_deviation.v}<={tolerance.v},"agree","do not agree")', "",
               '=IF({largest_deviation}<={tolerance},"agree","do not agree")',
               "agree where the largest deviation is within the tolerance", "General", difference="none"),
    ]  # fmt: skip
    return rows


def build() -> CalcSheet:
    """Return the sheet of the elastic constants."""
    sheet = CalcSheet(
        SHEET,
        "Elastic constants of an isotropic material",
        "Retrieval hoist of a tidal-stream turbine (an invented machine): steel of strap and shaft",
        "Steel T-3",
        "as shipped",
    )
    sheet.lay([*_INPUTS, *_constants(), *_consistency()])
    sheet.finish()
    return sheet
