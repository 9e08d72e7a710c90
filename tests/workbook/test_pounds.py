"""Pounds on US sheets: a force where only a force can stand, a mass where the words say so, and said either way."""

from workbook.small_books import rows, told, traced


def test_a_sheet_that_writes_lb_for_a_force_is_read_and_told_once() -> None:
    tracing = traced(
        rows(
            ("Load P", 900.0, "lb"),
            ("Arm", 12.0, "in"),
            ("Moment M", "=B1*B2", "in-lb"),
            ("Section modulus", 0.8, "in^3"),
            ("Bending stress", "=B3/B4", "psi"),
        )
    )
    assert told(tracing) == [("C1", "unit-text", "note")]
    assert "write lbf for a force" in tracing.findings[0].message


def test_a_mass_in_pounds_stays_a_mass() -> None:
    tracing = traced(rows(("Mass of the hook", 900.0, "lb"), ("Mass of two", "=2*B1", "lb")))
    assert told(tracing) == []


def test_a_mass_that_is_used_as_a_force_is_found() -> None:
    tracing = traced(rows(("Mass of the hook", 900.0, "lb"), ("Area", 2.0, "in^2"), ("Stress", "=B1/B2", "psi")))
    assert ("B3", "unit-label", "error") in told(tracing)


def test_pounds_per_inch_are_a_line_load_unless_the_words_say_mass() -> None:
    line = traced(rows(("w", 12.0, "lb/in"), ("L", 48.0, "in"), ("Reaction", "=B1*B2/2", "lbf")))
    assert [kind for _, kind, _ in told(line)] == ["unit-text"]
    mass = traced(rows(("Mass per length", 12.0, "lb/in"), ("L", 48.0, "in"), ("Mass", "=B1*B2", "lb")))
    assert told(mass) == []
