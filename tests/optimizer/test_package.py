"""What the package promises to Python users."""

import inspect

import pandas as pd

import optimizer


def test_public_names_are_what_they_say(small_search):
    from optimizer import Study, front, search

    assert inspect.isfunction(search)
    assert inspect.isfunction(front)
    assert inspect.isclass(Study)
    assert isinstance(front(small_search).table, pd.DataFrame)


def test_export_list_is_exact():
    assert sorted(optimizer.__all__) == ["Front", "SearchResult", "Study", "front", "search"]
    for name in optimizer.__all__:
        assert getattr(optimizer, name).__module__.startswith("optimizer.")
