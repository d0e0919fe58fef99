"""A phone's notebook without its screens, a real store, and a line between them that can fail."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from tests.browser.conftest import Phone
from tests.browser.notebook.faulty_line import Line, serving
from tests.browser.notebook.notebook_page import NotebookPage, Profile
from tests.browser.notebook.store_of_one_survey import StoreOfOneSurvey


@pytest.fixture
def store(tmp_path: Path) -> Iterator[StoreOfOneSurvey]:
    store = StoreOfOneSurvey(tmp_path / "store")
    yield store
    store.close()


@pytest.fixture
def line(store: StoreOfOneSurvey) -> Iterator[Line]:
    with serving(store.app) as port:
        line = Line(port)
        yield line
        line.close()


@pytest.fixture
def profile(new_phone: Callable[[], Phone]) -> Profile:
    return Profile(new_phone())


@pytest.fixture
def twin(profile: Profile) -> Iterator[Callable[[], Profile]]:
    """Copies the phone as it is to a second one."""
    made: list[Profile] = []

    def make() -> Profile:
        made.append(profile.twin())
        return made[-1]

    yield make
    for each in made:
        each.phone.forget()


@pytest.fixture
def joined(profile: Profile, line: Line, store: StoreOfOneSurvey) -> NotebookPage:
    """A page that has just joined, whose database transactions are watched."""
    page = profile.page(line.address, watch=True)
    page.join(store.joining_code())
    page.transactions()
    return page
