from typing import ClassVar

import pytest

from governance.errors import StintbookError


class TooDeep(StintbookError):
    code: ClassVar[str] = "test.too_deep"
    message: ClassVar[str] = "Found {found} m; accepted is at most {accepted} m."


def test_a_refusal_says_its_facts_in_words_and_keeps_them():
    refused = TooDeep(found=12, accepted=9)
    assert str(refused) == "Found 12 m; accepted is at most 9 m."
    assert refused.facts == {"found": 12, "accepted": 9}


def test_a_fact_that_the_message_names_has_to_be_given():
    with pytest.raises(KeyError):
        TooDeep(found=12)
