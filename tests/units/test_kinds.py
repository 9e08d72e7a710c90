"""What an argument that asks for one kind of quantity accepts, and what it says to the others."""

import pytest

from doubler.units import KINDS, consistent_set, kind, parse_quantity, parse_unit, read_unit, split_heading


@pytest.mark.parametrize("name", KINDS)
def test_every_kind_accepts_its_own_units_and_its_example(name: str) -> None:
    own = kind(name)
    for text in (own.metric, own.us):
        unit = parse_unit(text)
        assert own.accepts(unit) is None
        assert unit.dimension == own.dimension
    value, unit = (0.3, parse_unit("1")) if name == "ratio" else parse_quantity(own.example)
    assert value > 0
    assert own.accepts(unit) is None


@pytest.mark.parametrize(
    ("name", "text", "says"),
    [
        ("force", "lb", "lb is a mass and a force is due; write lbf"),
        ("force", "lbs", "write lbf"),
        ("force", "kg", "write N (the weight of 1 kg is 9.80665 N)"),
        ("force", "MPa", "write N"),
        ("moment", "in-lb", "write in-lbf"),
        ("moment", "lb-ft", "write lbf-ft"),
        ("moment", "pounds·ft", "write lbf·ft"),
        ("moment", "J", "J is an energy and a moment is due; write N·m"),
        ("moment", "kJ", "is an energy"),
        ("stress", "lb/in2", "write lbf/in2"),
        ("stress", "lbs/in2", "write lbf/in2"),
        ("stress", "kg/mm2", "write MPa"),
        ("stiffness", "lb/in", "write lbf/in"),
        ("temperature", "Δ°C", "is a temperature difference and a temperature is due; write °C"),
        ("temperature", "Δ°F", "write °F"),
        ("angle", "1", "1 is a ratio and an angle is due; write deg or rad"),
        ("angle", "%", "write deg or rad"),
        ("ratio", "deg", "deg is an angle and a ratio is due; write a pure number"),
        ("ratio", "rad", "write a pure number"),
        ("strain", "deg", "an angle and a strain is due"),
        ("strain", "MPa", "or µε"),
        ("frequency", "rpm", "write Hz (1 rpm is 0.0166667 Hz)"),
        ("frequency", "rad/s", "write Hz (1 rad/s is 0.159155 Hz)"),
        ("angular_speed", "Hz", "write rpm or rad/s (1 Hz is 60 rpm)"),
        ("angular_speed", "1/s", "write rpm or rad/s"),
        ("acceleration", "g", "write g0"),
        ("length", "in2", "in2 is an area and a length is due; write in"),
        ("area", "mm", "mm is a length and an area is due; write mm^2"),
    ],
)
def test_another_kind_is_refused_with_what_to_write(name: str, text: str, says: str) -> None:
    assert says in (kind(name).accepts(parse_unit(text)) or "accepted")


@pytest.mark.parametrize(
    ("name", "text"),
    [
        ("energy", "J"),
        ("energy", "ft-lbf"),
        ("temperature", "K"),
        ("temperature", "°F"),
        ("temperature_change", "°C"),
        ("temperature_change", "Δ°F"),
        ("strain", "%"),
        ("strain", "µm/m"),
        ("shear_strain", "mrad"),
        ("curvature", "rad/m"),
        ("rotational_stiffness", "N·m"),
        ("angular_speed", "deg/s"),
        ("frequency", "1/s"),
    ],
)
def test_what_the_trade_writes_for_a_kind_is_accepted(name: str, text: str) -> None:
    assert kind(name).accepts(parse_unit(text)) is None


def test_a_set_reads_bare_numbers_but_no_angle_temperature_or_speed() -> None:
    for name in ("N-mm", "N-m", "lbf-in", "kip-in"):
        chosen = consistent_set(name)
        assert chosen is not None
        assert chosen.bare_input("force").text == name.split("-")[0]
        for loose in ("angle", "temperature", "angular_speed", "twist_rate"):
            with pytest.raises(ValueError, match="reads two ways"):
                chosen.bare_input(loose)


@pytest.mark.parametrize(("wrong", "right"), [("n-mm", "N-mm"), ("LBF-IN", "lbf-in"), ("N–mm", "N-mm"), ("N_m", "N-m")])
def test_a_set_in_wrong_case_is_offered_the_right_one(wrong: str, right: str) -> None:
    with pytest.raises(ValueError, match=f"write {right}"):
        consistent_set(wrong)


@pytest.mark.parametrize("name", ["N-mm", "N-m", "lbf-in", "kip-in"])
def test_the_units_of_a_set_agree_with_one_another(name: str) -> None:
    chosen = consistent_set(name)
    assert chosen is not None
    unit = {
        what: chosen.unit_for(what).scale for what in ("force", "length", "stress", "moment", "mass", "acceleration")
    }
    assert unit["stress"] == pytest.approx(unit["force"] / unit["length"] ** 2, rel=1e-14)
    assert unit["moment"] == pytest.approx(unit["force"] * unit["length"], rel=1e-14)
    assert unit["force"] == pytest.approx(unit["mass"] * unit["acceleration"], rel=1e-14)


@pytest.mark.parametrize("name", KINDS)
def test_every_unit_of_a_set_can_be_read_back(name: str) -> None:
    for set_name in ("N-mm", "N-m", "lbf-in", "kip-in"):
        chosen = consistent_set(set_name)
        assert chosen is not None
        unit = chosen.unit_for(name)
        again = parse_unit(unit.text)
        assert again.dimension == unit.dimension
        assert again.scale == pytest.approx(unit.scale, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "place", "found"),
    [
        ("N/mm2", "unit cell", "unit"),
        ("Mpa", "unit cell", "error"),
        ("kn", "bracket", "error"),
        ("N/A", "unit cell", "none"),
        ("A", "label tail", "none"),
        ("in", "label tail", "none"),
        ("Rev B", "unit cell", "none"),
        ("see sheet 2", "bracket", "none"),
        ("-", "unit cell", "unit"),
        ("-", "label tail", "none"),
        ("N/mm·mm", "bracket", "error"),
        ("mPa", "bracket", "error"),
        ("upper skin", "unit cell", "none"),
    ],
)
def test_cell_text_is_told_as_unit_mistake_or_word(text: str, place: str, found: str) -> None:
    unit = read_unit(text, place)  # type: ignore[arg-type]
    assert {"Unit": "unit", "UnitError": "error", "NoneType": "none"}[type(unit).__name__] == found


@pytest.mark.parametrize(
    ("heading", "parts"),
    [
        ("Axial load [kN]", ("Axial load", "kN", "bracket")),
        ("Length (mm):", ("Length", "mm", "bracket")),
        ("Moment, kN·m", ("Moment", "kN·m", "comma")),
        ("K_IC [MPa·m^(1/2)]", ("K_IC", "MPa·m^(1/2)", "bracket")),
        ("kN", ("kN", None, "")),
        ("Factor", ("Factor", None, "")),
    ],
)
def test_heading_is_split_from_its_unit(heading: str, parts: tuple[str, str | None, str]) -> None:
    assert split_heading(heading) == parts
