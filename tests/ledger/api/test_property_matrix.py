"""What each visitor may read of an object, field by field; and fields that nobody may write."""

from typing import Any

import pytest

from tests.ledger import builders
from tests.ledger.api.stage import DAY, MEMBER, Stage, slip

ENTRY = (
    "number kind day occurred_at recorded_at by subject reverses reversed_by facts postings texts"
)
CASE = "number state finding clause ladder concerns officer decided_on final_on amount money events"
FINDING = (
    "number version standing clause edition about subject resource first last unit total limit"
    " breach overuse entries working"
)
STANDING = "member as_of orders suspended_until seasons duties dues reasons"
SEASON = "season resource unit first last closed allowable taken your_taken your_left"
COMMONS = "commons name zone money is_demo member offices resources zones head"
READABLE = {
    "": COMMONS,
    "head": "size root recorded_at proof_line",
    "entries/{entry}": ENTRY,
    "entries/{entry}/receipt": "number leaf path head",
    "findings/1": FINDING + " reasons",
    "cases/1": CASE,
    "members/5/standing": STANDING,
    "seasons/clams-2026": SEASON,
}
# What the book alone says, and what no request may claim.
NEVER_WRITTEN = (
    "number",
    "hash",
    "leaf_hash",
    "recorded_at",
    "by",
    "commons_id",
    "is_staff",
    "approved_by",
    "device",
    "reverses",
)


@pytest.fixture
def entry(stage: Stage) -> int:
    """The member's slip over the limit, from which a finding and a case were noted."""
    stage.bay.morning(DAY, hour=20)
    number = stage.bay.lands("L", builders.line("clams", "60"), member=MEMBER, day=DAY)
    stage.bay.judges(DAY.replace(day=3))
    stage.bay.hears()
    return number


@pytest.mark.parametrize("path", READABLE)
@pytest.mark.parametrize("who", ["secretary", "board", "auditor", "member"])
def test_each_visitor_reads_just_these_fields(
    stage: Stage, entry: int, who: str, path: str
) -> None:
    """The same for all who may read the object; nothing of an account, a secret or a name."""
    found = stage.get(who, path.format(entry=entry)).json()
    assert set(found) == set(READABLE[path].split())
    assert "Member 5" not in str(found)


def test_names_are_read_in_the_list_of_members_alone(stage: Stage) -> None:
    """And there only by those who need them."""
    for who, named in (("secretary", True), ("monitor", True), ("board", True), ("auditor", False)):
        (first, *_) = stage.get(who, "members").json()["members"]
        assert set(first) == {"number", "household", "draw_point", "name"}
        assert bool(first["name"]) is named


def _bodies(entry: int) -> dict[str, tuple[str, dict[str, Any]]]:
    return {
        "withdrawals": ("secretary", slip("N")),
        "withdrawals/batch": ("secretary", {"slips": [slip("N", key="n")]}),
        f"entries/{entry}/reversal": ("secretary", {"reason": "misread"}),
        "cases/1/moves": (
            "secretary",
            {"move": "check", "role": "secretary", "officer": 3},
        ),
    }


@pytest.mark.parametrize("field", NEVER_WRITTEN)
def test_a_field_that_nobody_may_write_is_refused(stage: Stage, entry: int, field: str) -> None:
    """In every body, at its top and inside; and nothing is recorded."""
    before = stage.bay.size
    tag = stage.get("secretary", "cases/1")["ETag"]
    for path, (who, body) in _bodies(entry).items():
        answer = stage.post(who, path, body | {field: 1}, Idempotency_Key="n", If_Match=tag)
        assert answer.status_code == 400, path
        assert field in [each["field"] for each in answer.json()["errors"]]
    inner = {"slips": [slip("N", key="n", **{field: 1})]}
    assert stage.post("secretary", "withdrawals/batch", inner).status_code == 400
    assert stage.bay.size == before
