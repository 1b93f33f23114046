"""Case events between the rows that keep them and the records of the procedure."""

from collections.abc import Mapping
from datetime import date
from typing import Any

from governance.sanctions.moves import Move, Role
from governance.sanctions.record import Actor, Delivery, Event
from ledger.cases import models

# The name of a move's reason among the texts of its entry.
REASON = "reason"


def event(row: models.Event, texts: Mapping[str, str]) -> Event:
    """Return the event that a row keeps; its reason stands among the texts of its entry."""
    details = row.details
    return Event(
        move=Move(row.move),
        actor=Actor(role=Role(row.role), member=row.member),
        on=row.on,
        reason=texts.get(REASON, ""),
        subjects=frozenset(details["subjects"]),
        concerns_board=details["concerns_board"],
        monitors=frozenset(details["monitors"]),
        officer=details["officer"],
        delivery=_delivery(details["delivery"]),
        proposes_warning=details["proposes_warning"],
        step=details["step"],
        amount_minor=details["amount_minor"],
    )


def details(event: Event) -> dict[str, Any]:
    """Return what a row, and the entry beside it, keep of an event."""
    return {
        "subjects": sorted(event.subjects),
        "concerns_board": event.concerns_board,
        "monitors": sorted(event.monitors),
        "officer": event.officer,
        "delivery": None
        if event.delivery is None
        else {
            "on": event.delivery.on.isoformat(),
            "means": event.delivery.means,
            "proved": event.delivery.proved,
        },
        "proposes_warning": event.proposes_warning,
        "step": event.step,
        "amount_minor": event.amount_minor,
    }


def _delivery(kept: dict[str, Any] | None) -> Delivery | None:
    if kept is None:
        return None
    return Delivery(on=date.fromisoformat(kept["on"]), means=kept["means"], proved=kept["proved"])
