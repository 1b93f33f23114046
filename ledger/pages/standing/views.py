"""A member's standing, and the seasons as the group and the board read them."""

from datetime import date

from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect

from ledger.foundation.clocks import system_clock
from ledger.pages.visiting import page, show
from ledger.reports import cautions, numbers, standing
from ledger.reports.standing import Standing
from ledger.web.visitors import NotHere, Visitor

HOUR = 60


@page
def own(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """Lead to the visitor's own standing."""
    return redirect("standing", slug=visitor.commons.slug, number=visitor.member)


@page
def member(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Show where a member stands and why."""
    if not visitor.sees_member(number):
        raise NotHere(what="member")
    try:
        found = standing.standing(
            commons_id=visitor.commons.commons_id, member=number, now=system_clock()
        )
    except standing.NoSuchMember as error:
        raise NotHere(what="member") from error
    return show(
        request,
        visitor,
        "standing/member.html",
        standing=found,
        seasons=[_season(each) for each in found.seasons],
        duties=[_duty(each) for each in found.duties],
        dues=_dues(found, visitor),
        orders=[(order, _until(order.until)) for order in found.orders],
        cautions=cautions.CAUTIONS,
    )


def _until(day: date) -> str:
    return "further notice" if day == date.max else day.isoformat()


def _season(each: standing.SeasonStanding) -> dict[str, object]:
    allotted, taken, left = (
        numbers.amount_with_unit(value, base=each.base, unit=each.unit)
        for value in (each.allotted, each.taken, each.left)
    )
    return {
        "sentence": each.sentence,
        "season": each.season,
        "resource": each.resource,
        "first": each.first,
        "last": each.last,
        "allotted": allotted,
        "taken": taken,
        "left": left,
    }


def _duty(each: standing.DutyStanding) -> dict[str, object]:
    owed, worked, bought = (
        f"{numbers.tenths(minutes / HOUR)} h" for minutes in (each.owed, each.worked, each.bought)
    )
    return {
        "title": each.title,
        "clause": each.clause,
        "owed": owed,
        "worked": worked,
        "bought": bought,
    }


def _dues(found: Standing, visitor: Visitor) -> list[dict[str, str]]:
    money = visitor.commons.money
    return [
        {
            "kind": due.kind,
            "owed": numbers.money(due.owed, currency=money),
            "paid": numbers.money(due.paid, currency=money),
        }
        for due in found.dues
    ]
