"""One installed LibreOffice profile and one session for all office tests of this folder."""

import pytest

from doubler.hosts import calc_commands, calc_profile


@pytest.fixture(scope="session")
def profile(tmp_path_factory):
    made = tmp_path_factory.mktemp("calc") / "profile"
    report = calc_commands.install(made)
    assert report.right
    return made


@pytest.fixture(scope="session")
def office(profile):
    with calc_profile.Driven(profile) as session:
        yield session
