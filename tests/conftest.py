"""What all tests share: the cast as fixtures, and a steady profile for random examples."""

from __future__ import annotations

import sys

import cast
import pytest
from hypothesis import HealthCheck, settings

# Helpers that assert say what they compared.
pytest.register_assert_rewrite("view_pages")

# The same examples in every run, so that a run that fails can be repeated; slow machines are no failure.
settings.register_profile(
    "steady",
    derandomize=True,
    deadline=None,
    database=None,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large],
)
settings.load_profile("steady")


def pytest_sessionfinish() -> None:
    """Let go of the solids that were kept: their library complains of those alive when Python ends."""
    for name, keepers in (("invariants", ("bodies", "coarse_bodies")), ("built_models", ("model", "opened"))):
        module = sys.modules.get(name)
        for keeper in keepers if module else ():
            getattr(module, keeper).cache_clear()


@pytest.fixture(scope="session", params=cast.CAST)
def specimen(request) -> str:
    """Give the name of each specimen of the cast."""
    return request.param


@pytest.fixture(scope="session")
def description(specimen):
    """Give the description of each specimen."""
    return cast.described(specimen)


@pytest.fixture(scope="session")
def shed(specimen):
    """Give the building of each specimen."""
    return cast.shed_of(specimen)


@pytest.fixture(scope="session")
def desk(tmp_path_factory):
    """Give the running browser; it starts with the first test that asks for it."""
    from view_browser import started  # noqa: PLC0415 - only tests of the page load the driver

    with started(tmp_path_factory.mktemp("view")) as running:
        yield running


@pytest.fixture(scope="module")
def opened_shed(request, desk):
    """Give the page of the specimen that a module of browser tests names, opened once for all of them."""
    from view_pages import page_of  # noqa: PLC0415

    name = request.module.SPECIMEN
    with desk.opened(page_of(name), f"{request.module.__name__}-{name}") as sight:
        yield sight


@pytest.fixture
def view(opened_shed):
    """Give that page as it was opened, and see to it that a test leaves it unharmed."""
    from view_browser import unharmed  # noqa: PLC0415

    yield from unharmed(opened_shed)
