"""Reading the book by the API; expected amounts follow from the small commons' own numbers."""

from datetime import date, timedelta

import pytest
from django.db import transaction

from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import system_clock
from ledger.identity import operations as identity
from tests.ledger import builders
from tests.ledger.api import stage as staging
from tests.ledger.api.stage import AUDITOR, MEMBER, OTHER, Stage, slip

DAY = date(2026, 3, 2)


def _breach(stage: Stage, member: int = MEMBER) -> int:
    """Land more clams than a day allows, judge, and return the finding's number."""
    stage.bay.morning(DAY, hour=20)
    stage.bay.lands(f"L-{member}", builders.line("clams", "60"), member=member, day=DAY)
    stage.bay.judges(DAY + timedelta(days=1))
    stage.bay.hears()
    found = stage.get("secretary", "findings").json()["findings"]
    return next(each["number"] for each in found if each["subject"] in (member,))


def test_the_commons_says_who_you_are(stage: Stage) -> None:
    """Offices, resources, zones and the head."""
    found = stage.get("board", "").json()
    assert (found["member"], found["offices"]) == (builders.BOARD[0], ["board"])
    assert [each["code"] for each in found["resources"]] == ["clams", "mullet"]
    assert found["head"]["size"] == stage.bay.size
    assert found["head"]["proof_line"].startswith("entries 1–")


def test_another_commons_is_not_there(stage: Stage) -> None:
    """A token opens one commons; the others answer as if there were none."""
    for path in ("head", "entries", "entries/1", "members", "cases", "seasons"):
        assert stage.get("stranger", path).status_code == 404


def test_names_are_for_those_who_need_them(stage: Stage) -> None:
    """The auditor counts members without their names; a member is refused."""
    assert stage.get("secretary", "members").json()["members"][0]["name"] == "Member 1"
    assert {each["name"] for each in stage.get("auditor", "members").json()["members"]} == {""}
    assert stage.get("member", "members").status_code == 403


def test_a_finding_is_read_with_its_reasons(stage: Stage) -> None:
    """A member reads their own with its working; another's is not there."""
    number = _breach(stage)
    found = stage.get("member", f"findings/{number}").json()
    assert (found["subject"], found["unit"]) == (MEMBER, "g")
    assert found["reasons"]
    assert stage.get("auditor", f"findings/{number}").status_code == 200
    other = _breach(stage, member=OTHER)
    assert stage.get("member", f"findings/{other}").status_code == 404
    assert stage.get("monitor", f"findings/{other}").status_code == 404
    assert stage.get("member", "findings/999").status_code == 404
    assert [each["number"] for each in stage.get("member", "findings").json()["findings"]] == [
        number
    ]


def test_a_season_shows_the_group_and_your_own(stage: Stage) -> None:
    """1,100 kg of mullet, of which member 1 is allotted 588 kg (the small commons' own split)."""
    stage.post("secretary", "withdrawals", slip(member=1), Idempotency_Key="k")
    found = stage.get("board", "seasons/mullet-2026").json()
    assert (found["allowable"], found["taken"]) == ("1100000", "10000")
    assert (found["your_taken"], found["your_left"]) == ("10000", "578000")
    assert [each["season"] for each in stage.get("member", "seasons").json()["seasons"]] == [
        "clams-2026",
        "mullet-2026",
    ]
    assert stage.get("member", "seasons/none").status_code == 404


def test_there_is_no_advice_and_no_report_before_their_time(stage: Stage) -> None:
    """404 while none was made, 409 while the season is open, 403 for a member."""
    assert stage.get("member", "seasons/mullet-2026/advice").status_code == 404
    assert stage.get("board", "reports/2026-03-01").status_code == 409
    assert stage.get("board", "reports/2026-03-02").status_code == 404
    assert stage.get("board", "reports/2026-02-30").status_code == 404
    assert stage.get("member", "reports/2026-03-01").status_code == 403


def test_a_token_reaches_as_far_as_its_scopes(stage: Stage, chance: object) -> None:
    """A phone that may only record cannot read, and the other way round."""
    for scopes, read, record in ((("record",), 403, 201), (("read",), 200, 403)):
        stage.tokens["phone"] = staging.token(
            commons_id=stage.bay.commons_id,
            member=MEMBER,
            chance=stage.bay.chance,
            device=scopes[0],
            scopes=scopes,
        )
        assert stage.get("phone", "head").status_code == read
        answer = stage.post("phone", "withdrawals", slip(), Idempotency_Key="k")
        assert answer.status_code == record


def test_a_token_is_ended_by_its_owner_alone(stage: Stage) -> None:
    """From the next request on it opens nothing."""
    (mine,) = stage.get("member", "tokens").json()["tokens"]
    assert mine["device"] == "phone"
    assert stage.get("member", "tokens").json()["tokens"][0]["last_used_on"] == str(
        system_clock().date()
    )
    assert stage.delete("board", f"tokens/{mine['number']}").status_code == 404
    assert stage.delete("member", f"tokens/{mine['number']}").status_code == 204
    assert stage.get("member", "tokens").status_code == 401


def test_an_office_holds_from_the_next_request_on(stage: Stage) -> None:
    """Whoever is given an office needs no new token."""
    assert stage.get("member", "members").status_code == 403
    today = stage.bay.hand.clock().date()
    with transaction.atomic():
        commons.give_role(
            commons_id=stage.bay.commons_id,
            member=MEMBER,
            role="board",
            during=DateRange(first=today, until=system_clock().date() + timedelta(days=2)),
            hand=stage.bay.hand,
        )
    assert stage.get("member", "members").status_code == 200


@pytest.mark.parametrize("who", [*staging.WHO, "stranger", "nobody"])
def test_the_document_is_for_everybody(stage: Stage, who: str) -> None:
    """The schema holds no secret."""
    assert stage.get(who, "/api/v1/schema").status_code == 200


def test_a_card_given_again_ends_the_one_before(stage: Stage) -> None:
    """An account that stands keeps its token; the auditor's is such."""
    with transaction.atomic():
        identity.open_account(
            username="again",
            commons_id=stage.bay.commons_id,
            member=AUDITOR,
            clock=system_clock,
            chance=stage.bay.chance,
        )
    assert stage.get("auditor", "head").status_code == 200
