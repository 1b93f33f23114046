"""Reading the book: the commons, its head, members, findings, seasons and advice."""

import dataclasses
import json
from datetime import date
from typing import Any, ClassVar

from django.db import transaction
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.request import Request
from rest_framework.response import Response

from ledger.advice import queries as advice
from ledger.api import answers, fields, shapes
from ledger.api.views import CommonsView
from ledger.commons import queries as commons
from ledger.foundation.clocks import system_clock
from ledger.foundation.errors import LedgerError
from ledger.identity import operations as identity
from ledger.identity import queries as accounts
from ledger.journal import queries as journal
from ledger.judgement import queries as judgement
from ledger.reports import collecting, figures, standing
from ledger.seasons import queries as seasons
from ledger.web.visitors import AUDITOR, BOARD, MONITOR, SECRETARY, NotHere


class NoAdvice(LedgerError):
    """No advice was made for a season yet."""

    code: ClassVar[str] = "api.no_advice"
    message: ClassVar[str] = "No advice was made for the season {season} yet."


class PrefixIn(fields.StrictSerializer):
    """The two sizes of the journal that are to be held against each other."""

    old = serializers.IntegerField(min_value=0, max_value=fields.ENTRY_MAX)
    new = serializers.IntegerField(min_value=0, max_value=fields.ENTRY_MAX)


class Commons(CommonsView):
    """The commons."""

    @extend_schema(operation_id="read_commons", responses={200: shapes.CommonsOut})
    def get(self, request: Request, slug: str) -> Response:
        """Read what the commons keeps, in which offices you are here, and the head."""
        kept = self.visitor.commons
        document = {
            "commons": kept.slug,
            "name": kept.name,
            "zone": kept.zone,
            "money": kept.money,
            "is_demo": kept.is_demo,
            "member": self.visitor.member,
            "offices": sorted(self.visitor.roles),
            "resources": [
                dataclasses.asdict(each)
                for each in commons.resources(commons_id=self.commons_id).values()
            ],
            "zones": [
                dataclasses.asdict(each)
                for each in commons.zones(commons_id=self.commons_id).values()
            ],
            "head": answers.head(journal.head(commons_id=self.commons_id)),
        }
        return Response(document)


class Head(CommonsView):
    """The journal's tree head."""

    @extend_schema(operation_id="read_head", responses={200: answers.HeadOut})
    def get(self, request: Request, slug: str) -> Response:
        """Read the head. Keep it elsewhere: it shows later that nothing before was rewritten."""
        return Response(answers.head(journal.head(commons_id=self.commons_id)))


class Prefix(CommonsView):
    """The proof that an earlier journal is the beginning of a later one."""

    @extend_schema(
        operation_id="read_prefix_proof",
        parameters=[
            OpenApiParameter(
                name,
                {"type": "integer", "minimum": 0, "maximum": fields.ENTRY_MAX},
                OpenApiParameter.QUERY,
                required=True,
            )
            for name in ("old", "new")
        ],
        responses={200: shapes.PrefixOut},
    )
    def get(self, request: Request, slug: str) -> Response:
        """Read the consistency proof (RFC 9162) from one size of the journal to a later one."""
        asked = PrefixIn(data=dict(request.query_params.items()))
        asked.is_valid(raise_exception=True)
        old, new = asked.validated_data["old"], asked.validated_data["new"]
        path = journal.consistency_proof(commons_id=self.commons_id, old_size=old, size=new)
        return Response({"old": old, "new": new, "path": [each.hex() for each in path]})


class Members(CommonsView):
    """The members, for those who keep or watch the book."""

    @extend_schema(operation_id="list_members", responses={200: shapes.MembersOut})
    def get(self, request: Request, slug: str) -> Response:
        """List the members. Names are for the secretary, the board and monitors."""
        self.visitor.needs(SECRETARY, BOARD, MONITOR, AUDITOR)
        named = self.visitor.holds(SECRETARY, BOARD, MONITOR)
        return Response(
            {
                "members": [
                    {
                        "number": each.number,
                        "household": each.household,
                        "draw_point": each.draw_point,
                        "name": each.name if named else "",
                    }
                    for each in commons.members(commons_id=self.commons_id).values()
                ]
            }
        )


class MemberStanding(CommonsView):
    """Where a member stands."""

    @extend_schema(
        operation_id="read_standing",
        parameters=[shapes.NUMBER],
        responses={200: shapes.StandingOut},
    )
    def get(self, request: Request, slug: str, number: int) -> Response:
        """Read what a member may still take and owes, what is open, and why."""
        if not self.visitor.sees_member(number):
            raise NotHere(what="member")
        found = standing.standing(commons_id=self.commons_id, member=number, now=system_clock())
        return Response(shapes.standing(found))


class Findings(CommonsView):
    """The findings that stand, as the visitor may see them."""

    @extend_schema(operation_id="list_findings", responses={200: shapes.FindingsOut})
    def get(self, request: Request, slug: str) -> Response:
        """List the findings that stand; a member is given those about their household."""
        if self.visitor.sees_everybody():
            found = tuple(
                record
                for record in judgement.latest(commons_id=self.commons_id).values()
                if record.standing
            )
        else:
            found = judgement.standing_about(
                commons_id=self.commons_id, members=self.visitor.household()
            )
        return Response({"findings": [shapes.finding(each) for each in found]})


class OneFinding(CommonsView):
    """One finding with its reasons."""

    @extend_schema(
        operation_id="read_finding",
        parameters=[shapes.NUMBER],
        responses={200: shapes.FindingOut},
    )
    def get(self, request: Request, slug: str, number: int) -> Response:
        """Read a finding opened in words, down to its entries and its clause."""
        found = judgement.by_number(commons_id=self.commons_id, numbers=(number,)).get(number)
        if found is None or not self._is_for_visitor(found):
            raise NotHere(what="finding")
        reasons = judgement.explained(commons_id=self.commons_id, number=number)
        return Response(shapes.finding(found) | {"reasons": list(reasons)})

    def _is_for_visitor(self, found: judgement.FindingRecord) -> bool:
        about = found.finding.key.subject
        return self.visitor.sees_member(about) or about in self.visitor.household()


class SeasonsView(CommonsView):
    """Whatever reads seasons."""

    def season(self, season: seasons.SeasonRecord) -> dict[str, Any]:
        """Return a season as it is answered: the group's sums, and the visitor's own."""
        allowable = seasons.allowable(commons_id=self.commons_id, season=season.code)
        taken = seasons.taken(commons_id=self.commons_id, season=season.code)
        left = seasons.left(commons_id=self.commons_id, season=season.code)
        own = self.visitor.member
        return {
            "season": season.code,
            "resource": season.resource,
            "unit": commons.resource(commons_id=self.commons_id, code=season.resource).base,
            "first": season.during.first.isoformat(),
            "last": season.during.last.isoformat(),
            "closed": season.closed,
            "allowable": None if allowable is None else str(allowable.amount),
            "taken": str(sum(taken.values())),
            "your_taken": str(taken.get(own, 0)),
            "your_left": str(left.get(own, 0)),
        }


class Seasons(SeasonsView):
    """The seasons."""

    @extend_schema(operation_id="list_seasons", responses={200: shapes.SeasonsOut})
    def get(self, request: Request, slug: str) -> Response:
        """List the seasons with what may be taken in each."""
        opened = seasons.seasons(commons_id=self.commons_id).values()
        return Response({"seasons": [self.season(each) for each in opened]})


class OneSeason(SeasonsView):
    """One season."""

    @extend_schema(operation_id="read_season", responses={200: shapes.SeasonOut})
    def get(self, request: Request, slug: str, season: str) -> Response:
        """Read a season."""
        return Response(self.season(seasons.season(commons_id=self.commons_id, code=season)))


class SeasonAdvice(CommonsView):
    """The advice for a season."""

    @extend_schema(operation_id="read_advice", responses={200: shapes.AdviceOut})
    def get(self, request: Request, slug: str, season: str) -> Response:
        """Read the last advice with its reasons and cautions. The board decides, not the advice."""
        seasons.season(commons_id=self.commons_id, code=season)
        found = advice.latest(commons_id=self.commons_id, season=season)
        if found is None:
            raise NoAdvice(season=season)
        return Response(
            {
                "season": season,
                "entry": found.entry,
                "digest": found.digest,
                "proposed": str(found.advice.proposed),
                "present": str(found.advice.present),
                "advice": plain(dataclasses.asdict(found.advice)),
            }
        )


class SeasonReport(CommonsView):
    """The season report as figures."""

    @extend_schema(
        operation_id="read_report",
        responses={200: shapes.ReportOut},
        parameters=[
            OpenApiParameter("first", {"type": "string", "format": "date"}, OpenApiParameter.PATH)
        ],
    )
    def get(self, request: Request, slug: str, first: date) -> Response:
        """Read every figure of the report on the seasons that begin on a day, once closed."""
        self.visitor.needs(SECRETARY, BOARD, AUDITOR)
        found = collecting.season_figures(
            commons_id=self.commons_id, first=first, made_at=system_clock()
        )
        return Response(
            {"digest": figures.digest(found), "figures": plain(dataclasses.asdict(found))}
        )


class Tokens(CommonsView):
    """The visitor's own devices."""

    @extend_schema(operation_id="list_tokens", responses={200: shapes.TokensOut})
    def get(self, request: Request, slug: str) -> Response:
        """List your tokens; their secrets are kept nowhere."""
        found = accounts.tokens(account_id=self.visitor.account_id, commons_id=self.commons_id)
        return Response({"tokens": [shapes.token(each) for each in found]})


class OneToken(CommonsView):
    """One of the visitor's own devices."""

    @extend_schema(operation_id="end_token", parameters=[shapes.NUMBER], responses={204: None})
    def delete(self, request: Request, slug: str, number: int) -> Response:
        """End a token of yours, of a phone that was lost."""
        with transaction.atomic():
            identity.end_token(
                account_id=self.visitor.account_id, token_id=number, clock=system_clock
            )
        return Response(status=204)


def plain(record: Any) -> Any:
    """Return a record as JSON has it; what is not a number, a text or a list becomes a text."""
    return json.loads(json.dumps(record, default=str))
