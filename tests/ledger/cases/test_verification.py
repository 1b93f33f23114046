"""A case or an event that is not what the entry of its move says is told, with the entry."""

from datetime import date

import pytest

from ledger.cases import models, verification
from ledger.journal import queries as journal
from tests.ledger import checks, falsifying, scene
from tests.ledger.cases import walks

DAY = date(2026, 3, 2)


@pytest.fixture
def walked(bay: scene.Scene) -> scene.Scene:
    """The bay with two cases: the first walked to its fine, the second noted."""
    walks.noted(bay, DAY)
    walks.final(bay, 1, DAY)
    walks.noted(bay, date(2026, 3, 31), kilograms="90", member=7)
    return bay


def _told(bay: scene.Scene) -> set[tuple[str, int | None]]:
    return falsifying.told(verification.problems(commons_id=bay.commons_id))


def _entry(bay: scene.Scene, move: str, case: int) -> int:
    found = journal.entries(commons_id=bay.commons_id, kinds=(f"case_{move}",))
    return next(entry.number for entry in found if entry.facts["case"] == case)


def test_honest_cases_are_sound(walked: scene.Scene) -> None:
    assert _told(walked) == set()


VALUES = {
    "place": "99",
    "move": "'attempt'",
    "role": "'monitor'",
    "member": "6",
    '"on"': "'2026-03-09'",
    "details": "'{\"step\": 0}'",
    "effects": "'[1]'",
    "finding_version": "7",
    "entry_number": "1",
}


@pytest.mark.parametrize("column", VALUES)
@pytest.mark.parametrize("move", ["note", "tell", "decide"])
def test_a_changed_event(walked: scene.Scene, column: str, move: str) -> None:
    falsifying.falsify(
        f"UPDATE cases_event SET {column} = {VALUES[column]} WHERE \"case\" = 1 AND move = '{move}'"
    )
    assert ("case events", _entry(walked, move, 1)) in _told(walked)


def test_another_fine(walked: scene.Scene) -> None:
    """One sum among the details of a decision."""
    row = models.Event.objects.get(case=1, move="decide")
    details = row.details | {"amount_minor": row.details["amount_minor"] + 100}
    falsifying.falsify(
        "UPDATE cases_event SET details = %s WHERE \"case\" = 1 AND move = 'decide'",
        str(details)
        .replace("'", '"')
        .replace("None", "null")
        .replace("False", "false")
        .replace("True", "true"),
    )
    (problem,) = verification.problems(commons_id=walked.commons_id)
    assert problem.number == _entry(walked, "decide", 1)
    assert "amount_minor is " in problem.what


@pytest.mark.parametrize(
    ("sql", "table", "move", "case"),
    [
        ("UPDATE cases_case SET number = 5 WHERE number = 2", "cases", "note", 2),
        ("UPDATE cases_case SET finding = 2 WHERE number = 1", "cases", "note", 1),
        ("UPDATE cases_case SET ladder = 'x' WHERE number = 1", "cases", "note", 1),
        ("DELETE FROM cases_case WHERE number = 1", "cases", "note", 1),
        ('DELETE FROM cases_event WHERE "case" = 1', "case events", "decide", 1),
        ("DELETE FROM cases_event WHERE move = 'decide'", "case events", "decide", 1),
        (
            'UPDATE cases_event SET "case" = 1, place = 50 WHERE "case" = 2',
            "case events",
            "note",
            2,
        ),
        ("DELETE FROM judgement_findingversion WHERE finding = 1", "findings", "tell", 1),
        ("UPDATE judgement_findingversion SET inputs = '0'", "findings", "note", 2),
        ("UPDATE judgement_findingversion SET clause = '0'", "findings", "note", 2),
        ("UPDATE judgement_findingversion SET edition = 7", "findings", "note", 2),
        ("UPDATE judgement_findingversion SET subject = 1", "findings", "note", 2),
    ],
)
def test_a_changed_row(walked: scene.Scene, sql: str, table: str, move: str, case: int) -> None:
    falsifying.falsify(sql)
    assert (table, _entry(walked, move, case)) in _told(walked)


def test_a_case_that_nobody_noted(walked: scene.Scene) -> None:
    models.Case.objects.create(
        commons_id=walked.commons_id, number=3, finding=1, ladder="ladder.overdraw"
    )
    assert _told(walked) == {("cases", None)}


def test_an_event_that_nobody_made(walked: scene.Scene) -> None:
    row = models.Event.objects.filter(case=1).order_by("-place").values()[0]
    models.Event.objects.create(**{**row, "id": None, "place": row["place"] + 1, "entry_number": 3})
    assert _told(walked) == {("case events", 3)}


def test_every_table_of_the_slice_is_falsified() -> None:
    tables = {model._meta.db_table for model in checks.sealed_of("cases")}
    assert tables == {"cases_case", "cases_event"}
