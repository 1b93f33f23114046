"""Recording, reading and undoing entries by the API."""

import base64
import hashlib
from datetime import datetime, timedelta

import pytest
from django.db import connection, transaction
from django.test.utils import CaptureQueriesContext

from ledger.api import authentication, entries, views
from ledger.foundation.clocks import system_clock
from ledger.identity import operations as identity
from ledger.seasons import queries as seasons
from tests.ledger.api.stage import HOUSEMATE, MEMBER, OTHER, Stage, slip

# Measured: 18 on SQLite, two of them the savepoint of the call, and 11 on PostgreSQL.
POST_QUERIES_MAX = 18


def test_a_slip_is_recorded_once_under_its_key(stage: Stage) -> None:
    """The same key and content again is a replay; another content under it is refused."""
    first = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1")
    again = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1")
    other = stage.post("member", "withdrawals", slip(note="no"), Idempotency_Key="k1")
    assert (first.status_code, again.status_code, other.status_code) == (201, 200, 422)
    assert first.json()["number"] == again.json()["number"]
    assert (first.json()["replayed"], again.json()["replayed"]) == (False, True)
    taken = seasons.taken(commons_id=stage.bay.commons_id, season="mullet-2026")
    assert taken == {MEMBER: 10_000}


def test_a_key_is_known_after_400_days(stage: Stage, monkeypatch: pytest.MonkeyPatch) -> None:
    """A telephone that comes back after its token ended is given another, and its keys hold."""
    first = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1")

    def later() -> datetime:
        return system_clock() + timedelta(days=400)

    for door in (authentication, entries, views):
        monkeypatch.setattr(door, "system_clock", later)
    assert stage.post("member", "withdrawals", slip(), Idempotency_Key="k1").status_code == 401
    with transaction.atomic():
        stage.tokens["member"] = identity.issue_token(
            commons_id=stage.bay.commons_id,
            member=MEMBER,
            device="phone",
            scopes=identity.SCOPES,
            clock=later,
            chance=stage.bay.chance,
        )
    again = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1")
    assert (again.status_code, again.json()["number"]) == (200, first.json()["number"])


def test_a_post_asks_the_database_little(stage: Stage) -> None:
    """However many slips there are already."""
    for place in range(5):
        stage.post("member", "withdrawals", slip(f"A-{place}"), Idempotency_Key=f"k{place}")
    with CaptureQueriesContext(connection) as asked:
        made = stage.post("member", "withdrawals", slip("B-1"), Idempotency_Key="k9")
    assert made.status_code == 201
    assert len(asked) <= POST_QUERIES_MAX


def test_the_same_key_of_another_device_is_another_slip(stage: Stage) -> None:
    """Keys are looked up together with who sends them."""
    mine = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1")
    theirs = stage.post("monitor", "withdrawals", slip("A-2"), Idempotency_Key="k1")
    assert theirs.status_code == 201
    assert theirs.json()["number"] == mine.json()["number"] + 1


@pytest.mark.parametrize(("key", "status"), [("", 400), ("k" * 255, 201), ("k" * 256, 400)])
def test_a_key_has_one_to_255_signs(stage: Stage, key: str, status: int) -> None:
    """The borders of a key's length."""
    assert stage.post("member", "withdrawals", slip(), Idempotency_Key=key).status_code == status


def test_a_slip_without_key_is_refused(stage: Stage) -> None:
    """The refusal says what is accepted, and nothing is recorded."""
    before = stage.bay.size
    refused = stage.post("member", "withdrawals", slip())
    assert refused.status_code == 400
    assert refused.json()["type"] == "/problems/api.key_missing"
    assert refused["Content-Type"] == "application/problem+json"
    assert stage.bay.size == before


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"member": "five"}, "member"),
        ({"member": 0}, "member"),
        ({"member": 2**31}, "member"),
        ({"taken_at": "2026-03-02"}, "taken_at"),
        ({"taken_at": "2026-03-02T12:00:00"}, "taken_at"),
        ({"taken_at": "0001-01-01T00:00:00+00:00"}, "taken_at"),
        ({"slip": ""}, "slip"),
        ({"slip": "x" * 61}, "slip"),
        ({"slip": 7}, "slip"),
        ({"draw_point": "\u202eabc"}, "draw_point"),
        ({"draw_point": "\u200b"}, "draw_point"),
        ({"lines": []}, "lines"),
        ({"lines": [{"resource": "mullet"}]}, "lines.0.zone"),
        ({"number": 1}, "number"),
        ({"by": 1}, "by"),
    ],
)
def test_a_wrong_field_is_named(stage: Stage, change: dict[str, object], field: str) -> None:
    """Each wrong field is answered at its place, and nothing is recorded."""
    before = stage.bay.size
    refused = stage.post("member", "withdrawals", slip(**change), Idempotency_Key="k1")
    assert refused.status_code == 400
    assert field in [each["field"] for each in refused.json()["errors"]]
    assert stage.bay.size == before


@pytest.mark.parametrize("amount", ["1e5", "1_000", "-1", "1,5", ".5", "5.", "", 5, None, "٥", "²"])
def test_an_amount_is_a_plain_text(stage: Stage, amount: object) -> None:
    """What two readers could read in two ways is refused."""
    line = {"resource": "mullet", "zone": "outer_bay", "amount": amount, "unit": "kg"}
    refused = stage.post("member", "withdrawals", slip(lines=[line]), Idempotency_Key="k1")
    assert refused.status_code == 400


def test_a_take_of_tomorrow_is_refused(stage: Stage) -> None:
    """A slip cannot tell of what has not happened."""
    ahead = slip(taken_at="2199-01-01T12:00:00+00:00", handed_in="2199-01-01T13:00:00+00:00")
    refused = stage.post("member", "withdrawals", ahead, Idempotency_Key="k1")
    assert refused.json()["type"] == "/problems/api.taken_ahead"


def test_members_record_for_themselves_and_monitors_for_anybody(stage: Stage) -> None:
    """Who records for whom."""
    body = slip(member=OTHER)
    assert stage.post("member", "withdrawals", body, Idempotency_Key="k1").status_code == 403
    assert stage.post("monitor", "withdrawals", body, Idempotency_Key="k1").status_code == 201
    assert (
        stage.post("secretary", "withdrawals", slip("A-9"), Idempotency_Key="k").status_code == 201
    )


def test_a_batch_answers_for_each_slip(stage: Stage) -> None:
    """One slip that is refused stops no other, and a replay gives the same numbers."""
    batch = {
        "slips": [
            slip("B-1", key="1"),
            slip("B-2", key="2", member=999),
            slip("B-3", key="3"),
        ]
    }
    first = stage.post("monitor", "withdrawals/batch", batch).json()["answers"]
    again = stage.post("monitor", "withdrawals/batch", batch).json()["answers"]
    assert [sorted(each) for each in first] == [["receipt"], ["problem"], ["receipt"]]
    assert first[1]["problem"]["type"] == "/problems/commons.unknown_member"
    numbers = [each["receipt"]["number"] for each in first if "receipt" in each]
    assert numbers == [each["receipt"]["number"] for each in again if "receipt" in each]
    assert numbers[1] == numbers[0] + 1


def test_a_slip_is_undone_or_corrected_by_the_secretary(stage: Stage) -> None:
    """Both entries stay, and the accounts come to what is right."""
    made = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1").json()["number"]
    path = f"entries/{made}/reversal"
    assert stage.post("member", path, {"reason": "no"}).status_code == 403
    right = slip(lines=[{"resource": "mullet", "zone": "outer_bay", "amount": "4", "unit": "kg"}])
    done = stage.post("secretary", path, {"reason": "misread", "slip": right})
    assert done.status_code == 201
    undone, redone = (each["number"] for each in done.json()["receipts"])
    assert stage.post("secretary", path, {"reason": "again"}).status_code == 409
    taken = seasons.taken(commons_id=stage.bay.commons_id, season="mullet-2026")
    assert taken == {MEMBER: 4_000}
    only = stage.post("secretary", f"entries/{redone}/reversal", {"reason": "twice"})
    assert only.status_code == 201
    assert seasons.taken(commons_id=stage.bay.commons_id, season="mullet-2026")[MEMBER] == 0
    assert stage.get("member", f"entries/{made}").json()["reversed_by"] == undone


def test_a_list_leads_on_and_misses_nothing(stage: Stage) -> None:
    """Walking the list by its links gives every number once, while entries are added."""
    seen: list[int] = []
    path: str | None = "entries?limit=3"
    while path:
        answer = stage.get("secretary", path)
        document = answer.json()
        seen += [each["number"] for each in document["entries"]]
        path = document["next"]
        if path:
            assert answer["Link"] == f'<{path}>; rel="next"'
        if len(seen) == 6:
            stage.post("member", "withdrawals", slip(), Idempotency_Key="k1")
    assert seen == list(range(1, stage.bay.size + 1))


@pytest.mark.parametrize(
    "query", ["limit=201", "limit=0", "after=-1", "page_size=9", "kind=A", "member=0", "limit=x"]
)
def test_a_list_takes_only_what_it_names(stage: Stage, query: str) -> None:
    """A parameter that is unknown or out of bounds is refused."""
    assert stage.get("secretary", f"entries?{query}").status_code == 400


def test_a_member_sees_own_entries_and_no_others(stage: Stage) -> None:
    """Another's entry is not there, and lists hold none."""
    mine = stage.post("secretary", "withdrawals", slip(), Idempotency_Key="1").json()["number"]
    theirs = stage.post(
        "secretary", "withdrawals", slip("A-2", member=OTHER), Idempotency_Key="2"
    ).json()["number"]
    assert stage.get("member", f"entries/{mine}").status_code == 200
    assert stage.get("member", f"entries/{theirs}").status_code == 404
    assert stage.get("member", f"entries/{theirs}/receipt").status_code == 404
    assert stage.get("member", f"entries?member={HOUSEMATE}").status_code == 404
    listed = stage.get("member", "entries?kind=withdrawal").json()["entries"]
    assert [each["number"] for each in listed] == [mine]


def test_a_receipt_leads_from_the_leaf_to_the_head(stage: Stage) -> None:
    """The path of RFC 9162, folded here by hand, gives the root that the head shows."""
    made = stage.post("member", "withdrawals", slip(), Idempotency_Key="k1").json()
    found = stage.get("member", f"entries/{made['number']}/receipt").json()
    leaf = base64.b64decode(found["leaf"])
    assert hashlib.sha256(b"\x00" + leaf).hexdigest() == made["leaf_hash"]
    root = _root(
        leaf=bytes.fromhex(made["leaf_hash"]),
        index=made["number"] - 1,
        size=found["head"]["size"],
        path=[bytes.fromhex(each) for each in found["path"]],
    )
    assert root.hex() == found["head"]["root"]


def test_a_longer_journal_begins_with_the_earlier_one(stage: Stage) -> None:
    """The proof has the length that RFC 9162 gives for 2 of 3 entries: one node."""
    found = stage.get("member", "head/prefix?old=2&new=3").json()
    assert len(found["path"]) == 1
    assert stage.get("member", "head/prefix?old=2&new=99999").status_code == 409


def _root(*, leaf: bytes, index: int, size: int, path: list[bytes]) -> bytes:
    """Fold an audit path as RFC 9162, section 2.1.3.2, says."""
    node, place, last = leaf, index, size - 1
    for other in path:
        assert last > 0
        if place & 1 or place == last:
            node = hashlib.sha256(b"\x01" + other + node).digest()
            while not place & 1 and place:
                place >>= 1
                last >>= 1
        else:
            node = hashlib.sha256(b"\x01" + node + other).digest()
        place >>= 1
        last >>= 1
    assert last == 0
    return node


def test_what_was_split_among_members_is_not_for_each_of_them(stage: Stage) -> None:
    """The entry of an allowable holds everybody's allotment; the secretary reads it."""
    listed = stage.get("secretary", "entries?kind=allowable_adopted").json()["entries"]
    number = listed[0]["number"]
    for path in (f"entries/{number}", f"entries/{number}/receipt"):
        assert stage.get("secretary", path).status_code == 200
        assert stage.get("member", path).status_code == 404
        assert stage.get("monitor", path).status_code == 404
