"""The nearest known name: what was probably meant, never what would do harm."""

import pytest

from governance.bylaws import spelling

UNITS = ("g", "kg", "t", "h", "d")


@pytest.mark.parametrize(
    ("found", "meant"),
    [("Kg", "kg"), ("KG", "kg"), ("T", "t"), ("kgs", "kg"), ("furlong", None)],
)
def test_capitals_alone_come_before_likeness(found: str, meant: str | None) -> None:
    assert spelling.nearest(found, UNITS) == meant


def test_a_name_too_long_to_show_is_not_compared() -> None:
    assert spelling.nearest("k" * 61, ["k" * 61]) is None
