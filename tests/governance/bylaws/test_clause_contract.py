"""What holds for every kind of clause; a new kind needs an example before it passes."""

import dataclasses
import enum
import typing

import pytest

from governance.bylaws import clauses, documents, wording
from tests.governance.bylaws.examples import EXAMPLES, Example

every_example = pytest.mark.parametrize(
    "example", EXAMPLES, ids=[type(example.record).__name__ for example in EXAMPLES]
)


def test_every_kind_has_an_example() -> None:
    assert {type(example.record) for example in EXAMPLES} == set(typing.get_args(clauses.Clause))


@every_example
def test_a_complete_example_reads_as_its_record(example: Example) -> None:
    book = documents.read(text=example.text, name="example.yaml")
    found = [clause for clause in book.clauses if clause.head.id == example.id]
    assert found == [example.record]


@every_example
def test_its_sentence_is_the_one_written_by_hand(example: Example) -> None:
    book = documents.read(text=example.text, name="example.yaml")
    assert wording.sentence(clause=book.clause(example.id), book=book) == example.sentence


@every_example
def test_its_sentence_can_be_read_aloud(example: Example) -> None:
    book = documents.read(text=example.text, name="example.yaml")
    said = wording.sentence(clause=book.clause(example.id), book=book)
    assert said.endswith(".") and ". " not in said
    assert said[0].isupper()
    assert not {"_", "%", "/"} & set(said)


@every_example
def test_records_hold_plain_texts(example: Example) -> None:
    # Texts that know their place belong to the reading and must not leak into the records.
    book = documents.read(text=example.text, name="example.yaml")
    assert all(type(text) is str for text in _texts_in(book))


def _texts_in(value: object) -> typing.Iterator[str]:
    if isinstance(value, str) and not isinstance(value, enum.Enum):
        yield value
    elif isinstance(value, tuple):
        for each in value:
            yield from _texts_in(each)
    elif dataclasses.is_dataclass(value):
        for field in dataclasses.fields(value):
            yield from _texts_in(getattr(value, field.name))
