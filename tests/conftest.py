"""What all tests share: the real programs, found once, missing never in silence."""

import os
import shutil

import pytest
from hypothesis import settings


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Keep the tests of one real program on one worker: two LibreOffice sessions fight over one profile."""
    for item in items:
        for name in ("office", "browser"):
            if item.get_closest_marker(name):
                item.add_marker(pytest.mark.xdist_group(name))


@pytest.fixture(autouse=True)
def _real_programs(request: pytest.FixtureRequest) -> None:
    """A test that needs a program that is missing fails in CI; elsewhere it skips and says so."""
    for marker, programs in (("office", ["soffice"]), ("browser", ["chromium", "chromium-browser"])):
        if request.node.get_closest_marker(marker) and not any(map(shutil.which, programs)):
            message = f"{programs[0]} is not installed"
            if os.environ.get("CI"):
                pytest.fail(f"{message}; CI must install it")
            pytest.skip(message)


# Machines differ in speed, so no example has a deadline; in CI the examples are the same in every run.
settings.register_profile("doubler", deadline=None, derandomize=bool(os.environ.get("CI")))
settings.load_profile("doubler")
