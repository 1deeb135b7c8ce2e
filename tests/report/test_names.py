"""File names made of salts are safe and different."""

from hypothesis import given
from hypothesis import strategies as st

from reconcile.report.names import file_names


@given(st.lists(st.text(max_size=20), unique=True, max_size=8))
def test_no_name_leaves_its_folder_or_meets_another(salts):
    names = list(file_names(salts).values())
    assert len({name.lower() for name in names}) == len(salts)
    assert all(
        name and set(name) <= set("abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_-") for name in names
    )


def test_two_that_differ_in_case_only():
    assert list(file_names(["CoS", "COS"]).values()) == ["CoS", "COS_2"]
