"""The collector of circles is held still and let go again, whatever happens."""

import gc

import pytest

from doubler.workbook.collector import collector_held


def test_it_is_let_go_also_after_an_error() -> None:
    seen: list[bool] = []

    def fail() -> None:
        with collector_held():
            seen.append(gc.isenabled())
            raise ZeroDivisionError

    with pytest.raises(ZeroDivisionError):
        fail()
    assert seen == [False]
    assert gc.isenabled()


def test_within_another_it_stays_held() -> None:
    with collector_held():
        with collector_held():
            pass
        assert not gc.isenabled()
    assert gc.isenabled()
    assert gc.get_freeze_count() == 0
