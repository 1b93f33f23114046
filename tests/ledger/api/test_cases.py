"""A case taken through its moves by the API, by those whose moves they are."""

from datetime import date, timedelta
from typing import Any

from tests.ledger import builders
from tests.ledger.api.stage import MEMBER, Stage

DAY = date(2026, 3, 2)


def _noted(stage: Stage) -> int:
    """Land more clams than a day allows, judge, and return the number of the case."""
    stage.bay.morning(DAY, hour=20)
    stage.bay.lands("L-1", builders.line("clams", "60"), member=MEMBER, day=DAY)
    stage.bay.judges(DAY + timedelta(days=1))
    stage.bay.hears()
    cases = stage.get("secretary", "cases").json()["cases"]
    return int(next(each["number"] for each in cases if MEMBER in each["concerns"]))


def _move(stage: Stage, who: str, case: int, **body: Any) -> Any:
    """Make a move after reading the case as the secretary."""
    tag = stage.get("secretary", f"cases/{case}")["ETag"]
    return stage.post(who, f"cases/{case}/moves", body, If_Match=tag)


def test_a_case_is_seen_by_those_it_concerns(stage: Stage) -> None:
    """The household's, the keepers' and the auditor's; not a monitor's."""
    case = _noted(stage)
    for who, status in (("member", 200), ("auditor", 200), ("monitor", 404), ("stranger", 404)):
        assert stage.get(who, f"cases/{case}").status_code == status
    assert stage.get("monitor", "cases").json()["cases"] == []
    assert stage.get("member", "cases/999").status_code == 404


def test_a_case_moves_by_the_hands_it_belongs_to(stage: Stage) -> None:
    """Noted, checked, told and answered; each by its own office, and nobody decides for another."""
    case = _noted(stage)
    today = stage.get("secretary", f"cases/{case}").json()["events"][-1]["on"]
    checked = _move(stage, "secretary", case, move="check", role="secretary", officer=3)
    assert (checked.status_code, checked.json()["state"]) == (200, "checking")
    handed = {"on": checked.json()["events"][-1]["on"], "means": "by hand", "proved": True}
    told = _move(stage, "secretary", case, move="tell", role="secretary", handed=handed)
    assert told.json()["state"] == "told", (told.json(), today)
    words = {"move": "answer", "reason": "The scale was wet."}
    assert _move(stage, "monitor", case, role="monitor", **words).status_code == 404
    assert _move(stage, "board", case, role="member", member=MEMBER, **words).status_code == 403
    assert _move(stage, "secretary", case, role="secretary", **words).status_code == 403
    answered = _move(stage, "member", case, role="member", **words)
    assert answered.json()["state"] == "answered"
    decision = {"move": "decide", "role": "board", "reason": "It was over the limit."}
    assert _move(stage, "secretary", case, **decision).status_code == 403
    assert _move(stage, "secretary", case, member=1, **decision).status_code == 403
    decided = _move(stage, "board", case, **decision)
    assert decided.json()["state"] == "decided"
    assert decided.json()["events"][-1]["member"] == builders.BOARD[0]


def test_a_move_says_what_it_saw(stage: Stage) -> None:
    """428 without a tag, 412 with one that is old; and nothing is recorded."""
    case = _noted(stage)
    old = stage.get("secretary", f"cases/{case}")["ETag"]
    body = {"move": "check", "role": "secretary", "officer": 3}
    before = stage.bay.size
    assert stage.post("secretary", f"cases/{case}/moves", body).status_code == 428
    assert stage.bay.size == before
    assert stage.post("secretary", f"cases/{case}/moves", body, If_Match=old).status_code == 200
    stale = stage.post("secretary", f"cases/{case}/moves", body, If_Match=old)
    assert stale.status_code == 412
    assert stale.json()["type"] == "/problems/api.stale"


def test_what_the_procedure_refuses_is_a_conflict(stage: Stage) -> None:
    """A decision without a notice, a move without what it needs, and a move nobody knows."""
    case = _noted(stage)
    early = _move(stage, "board", case, move="decide", role="board", reason="no")
    assert early.status_code == 409
    bare = _move(stage, "secretary", case, move="check", role="secretary")
    assert bare.status_code == 409
    unknown = _move(stage, "secretary", case, move="forgive", role="secretary")
    assert unknown.status_code == 400
    assert "accepted are" in unknown.json()["detail"]


def test_a_monitor_reads_no_case_in_the_entries(stage: Stage) -> None:
    """What was taken, yes; what was found, checked or said of it, no."""
    case = _noted(stage)
    _move(stage, "secretary", case, move="check", role="secretary", officer=3)
    everything = stage.get("secretary", "entries?limit=200").json()["entries"]
    private = [each["number"] for each in everything if each["kind"].startswith("case_")]
    assert private
    seen = stage.get("monitor", "entries?limit=200").json()["entries"]
    assert not {each["number"] for each in seen} & set(private)
    assert "withdrawal" in {each["kind"] for each in seen}
    for number in private:
        assert stage.get("monitor", f"entries/{number}").status_code == 404
        assert stage.get("monitor", f"entries/{number}/receipt").status_code == 404


def test_an_officer_is_a_member(stage: Stage) -> None:
    """A number that nobody has is refused, and the case stays where it was."""
    case = _noted(stage)
    refused = _move(stage, "secretary", case, move="check", role="secretary", officer=2**31 - 1)
    assert refused.status_code == 400
    assert refused.json()["type"] == "/problems/commons.unknown_member"
    assert stage.get("secretary", f"cases/{case}").json()["state"] == "noted"
