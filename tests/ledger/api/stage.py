"""The small commons with its season open, and a token for each kind of visitor."""

import json
from dataclasses import dataclass
from datetime import UTC, date, datetime
from typing import Any

from django.db import transaction
from django.http import HttpResponse
from django.test import Client

from governance.periods import OPEN_END, DateRange
from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance, system_clock
from ledger.identity import operations as identity
from tests.conftest import TickingClock
from tests.ledger import builders, scene

AUDITOR, MEMBER, HOUSEMATE, OTHER = 8, 5, 6, 7
DAY = date(2026, 3, 2)
WHO = {
    "secretary": builders.SECRETARY,
    "monitor": builders.MONITOR,
    "board": builders.BOARD[0],
    "auditor": AUDITOR,
    "member": MEMBER,
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Stage:
    """A scene, and the tokens by who holds them; ``stranger`` belongs to another commons."""

    bay: scene.Scene
    tokens: dict[str, str]

    def get(self, who: str, path: str, **headers: str) -> Any:
        """Ask for an address under the commons."""
        return Client().get(_address(path), **self._headers(who, headers))

    def post(self, who: str, path: str, body: Any, **headers: str) -> Any:
        """Post a body as JSON under the commons; bytes go as they are."""
        data = body if isinstance(body, bytes) else json.dumps(body)
        return Client().post(
            _address(path), data, content_type="application/json", **self._headers(who, headers)
        )

    def delete(self, who: str, path: str) -> HttpResponse:
        """Ask for an address's end."""
        return Client().delete(_address(path), **self._headers(who, {}))

    def _headers(self, who: str, headers: dict[str, str]) -> dict[str, Any]:
        shown = {"Authorization": f"Bearer {self.tokens[who]}"} if who in self.tokens else {}
        named = {name.replace("_", "-"): value for name, value in headers.items()}
        return {"headers": shown | named}


def _address(path: str) -> str:
    return path if path.startswith("/") else f"/api/v1/commons/reed-bank/{path}"


def set_up(*, clock: TickingClock, chance: Chance) -> Stage:
    """Build the commons, another one, and a token for each kind of visitor."""
    bay = scene.opened(clock=clock, chance=chance)
    with transaction.atomic():
        commons.admit(
            commons_id=bay.commons_id, admissions=[builders.admission(AUDITOR)], hand=bay.hand
        )
        commons.give_role(
            commons_id=bay.commons_id,
            member=AUDITOR,
            role="auditor",
            during=DateRange(first=builders.SEASON.first, until=OPEN_END),
            hand=bay.hand,
        )
    elsewhere = builders.people(hand=bay.hand, slug="far-bank")
    tokens = {
        who: token(commons_id=bay.commons_id, member=member, chance=chance)
        for who, member in WHO.items()
    }
    tokens["stranger"] = token(commons_id=elsewhere, member=1, chance=chance)
    return Stage(bay=bay, tokens=tokens)


def token(
    *,
    commons_id: int,
    member: int,
    chance: Chance,
    device: str = "phone",
    scopes: tuple[str, ...] = identity.SCOPES,
) -> str:
    """Open an account for a member and return a token for a device of theirs."""
    with transaction.atomic():
        identity.open_account(
            username=f"{commons_id}-{member}",
            commons_id=commons_id,
            member=member,
            clock=system_clock,
            chance=chance,
        )
        return identity.issue_token(
            commons_id=commons_id,
            member=member,
            device=device,
            scopes=scopes,
            clock=system_clock,
            chance=chance,
        )


def slip(name: str = "A-1", **changes: Any) -> dict[str, Any]:
    """Return a slip of 10 kg of mullet by member 5, as a device sends it."""
    return {
        "slip": name,
        "member": MEMBER,
        "taken_at": "2026-03-02T12:00:00+00:00",
        "handed_in": datetime(2026, 3, 2, 14, tzinfo=UTC).isoformat(),
        "draw_point": "Boat 5",
        "lines": [{"resource": "mullet", "zone": "outer_bay", "amount": "10", "unit": "kg"}],
        **changes,
    }
