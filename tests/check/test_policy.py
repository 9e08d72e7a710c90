"""The policy file: what it asks for is found, what it silences is said, what it does not know is refused."""

from pathlib import Path

import pytest
from tests.check.written_sheets import all_written, build

from doubler.check.examination import check
from doubler.check.policy import read_policy
from doubler.errors import InputError
from strap_book import strap_template

BOOKS = {book.name: book for book in all_written()}


def policed(tmp_path: Path, name: str, text: str, fault: int = 0):
    book = BOOKS[name]
    (tmp_path / "doubler.toml").write_text(text, encoding="utf-8")
    return check(build(book, tmp_path / f"{name}.xlsx", book.faults[fault - 1] if fault else None))


def told(report) -> list[tuple[str, str, str]]:
    return [(f.kind, f.cell, f.severity) for f in report.findings if f.severity != "note"]


def test_a_factor_below_the_policy_is_found_where_it_stands(tmp_path: Path) -> None:
    assert told(policed(tmp_path, "strap_symbols", "[factors]\nultimate = 1.65\n")) == [
        ("factor-missing", "C8", "error")
    ]
    assert told(policed(tmp_path, "strap_symbols", "[factors]\nultimate = 1.5\n")) == []


def test_a_margin_without_the_factor_that_is_asked_for_is_found(tmp_path: Path) -> None:
    assert ("factor-missing", "B17", "error") in told(policed(tmp_path, "spring_angles", "[factors]\ntension = 1.5\n"))


def test_the_smallest_margin_is_held(tmp_path: Path) -> None:
    clean = policed(tmp_path, "formats_bolt", "[margins]\nsmallest = 0.0\n")
    assert told(clean) == []
    least = min(v for v in (clean.book.number(("Bolt", (13, 2))), clean.book.number(("Bolt", (14, 2)))) if v)
    report = policed(tmp_path, "formats_bolt", f"[margins]\nsmallest = {least + 0.01}\n")
    assert [kind for kind, _, _ in told(report)] == ["negative-margin"]


def test_a_unit_that_is_not_allowed_is_said_once(tmp_path: Path) -> None:
    report = policed(tmp_path, "strap_symbols", '[units]\nallowed = ["N", "mm", "mm^2", "MPa", "-"]\n')
    assert told(report) == [("unit-text", "C4", "warning")]


def test_a_silenced_kind_is_kept_with_its_reason(tmp_path: Path) -> None:
    text = '[kinds.hidden-input]\nseverity = "off"\nreason = "the customer hides it"\n'
    number = next(f.number for f in BOOKS["lug_left_unit"].faults if f.kind == "hidden-input")
    report = policed(tmp_path, "lug_left_unit", text, number)
    assert told(report) == []
    assert [f.kind for f in report.silenced] == ["hidden-input"]
    assert report.as_object()["policy"]["kinds"][0] == {
        "kind": "hidden-input", "severity": "off", "reason": "the customer hides it", "silenced": 1,
    }  # fmt: skip


def test_the_record_prints_the_reason_of_what_is_silenced(tmp_path: Path) -> None:
    from doubler.check.record import write_record

    book = strap_template(tmp_path / "strap.xlsx", {"ms_yield": "=C6/C10"})
    reason = "agreed with the customer for this part"
    (tmp_path / "doubler.toml").write_text(f'[kinds.margin-form]\nseverity = "off"\nreason = "{reason}"\n')
    page = write_record(check(book), tmp_path / "record").html.read_text(encoding="utf-8")
    assert "Checked under doubler.toml" in page
    assert reason in page
    (tmp_path / "doubler.toml").unlink()
    assert "Checked under" not in write_record(check(book), tmp_path / "other").html.read_text(encoding="utf-8")


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("[factor]\nultimate = 1.5\n", "factor is not known"),
        ("[factors]\nultimat = 1.5\n", r"\[factors\] ultimat is not known"),
        ("[factors]\nultimate = true\n", "must be a number"),
        ('[kinds.unused-inputs]\nseverity = "off"\nreason = "x"\n', "no such kind"),
        ('[kinds.unused-input]\nseverity = "off"\n', "gives no reason"),
        ('[kinds.unused-input]\nseverity = "none"\nreason = "x"\n', "write off, note"),
        ('[units]\nallowed = ["mpa"]\n', "MPa"),
        ("[terms.allowable]\nword = []\n", "word is not known"),
        ("factors = 3\n", "must be a table"),
        ("[factors\n", "no valid TOML"),
    ],
)
def test_what_a_policy_does_not_know_is_refused(tmp_path: Path, text: str, message: str) -> None:
    path = tmp_path / "policy.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(InputError, match=message):
        read_policy(path)


def test_a_policy_teaches_words(tmp_path: Path) -> None:
    number = next(f.number for f in BOOKS["weld_note_below"].faults if f.kind == "margin-form")
    report = policed(tmp_path, "weld_note_below", '[terms.allowable]\nwords = ["weld limit"]\n', number)
    assert ("margin-form", "B19", "error") in told(report)
