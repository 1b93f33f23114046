"""A season in progress: the group's sums, added up by the database, and the advice for it."""

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from governance.advice.records import Advice
from ledger.advice import queries as advice
from ledger.cases import queries as cases
from ledger.commons import queries as commons
from ledger.journal import queries as journal
from ledger.judgement import queries as judgement
from ledger.reports import numbers
from ledger.reports.figures import AllowableStep, DayTake
from ledger.seasons import queries as seasons

# Below this, a count would point at somebody.
FEW = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class SeasonProgress:
    """A season as it stands; amounts in base units.

    ``allowable`` is None before one was adopted. ``findings`` by clause and ``cases`` by state are
    counts of those that stand, about the window of the season.
    """

    season: str
    name: str
    base: str
    unit: str
    opens: date
    closes: date
    closed: bool
    allowable: int | None
    reserve: int
    taken: int
    daily: tuple[DayTake, ...]
    findings: Mapping[str, int]
    cases: Mapping[str, int]
    advice: Advice | None

    @property
    def allowable_steps(self) -> tuple[AllowableStep, ...]:
        """Return the allowable and the day from which it is in force."""
        if self.allowable is None:
            return ()
        return (AllowableStep(from_day=self.opens, amount=self.allowable),)

    @property
    def sentence(self) -> str:
        """Return what the board wants to know first."""
        taken = numbers.amount_with_unit(self.taken, base=self.base, unit=self.unit)
        if self.allowable is None:
            return f"{taken} of {self.name} was taken; no allowable was adopted for this season."
        allowable = numbers.amount_with_unit(self.allowable, base=self.base, unit=self.unit)
        said = f"{taken} of {self.name} was taken, of an allowable of {allowable}"
        if not self.allowable:
            return f"{said}."
        return f"{said}: {numbers.percent(self.taken / self.allowable)}."


def season_progress(*, commons_id: int, season: str) -> SeasonProgress:
    """Return how a season stands now.

    :raises ledger.seasons.queries.UnknownSeason: if the commons has no such season.
    """
    found = seasons.season(commons_id=commons_id, code=season)
    kept = commons.resource(commons_id=commons_id, code=found.resource)
    adopted = seasons.allowable(commons_id=commons_id, season=season)
    made = advice.latest(commons_id=commons_id, season=season)
    daily = journal.totals_by_day(
        commons_id=commons_id,
        prefix=seasons.taken_prefix(season=season),
        resource=found.resource,
        unit=kept.base,
    )
    findings, open_cases = _counts(commons_id, found)
    return SeasonProgress(
        season=season,
        name=kept.name,
        base=kept.base,
        unit=kept.unit,
        opens=found.during.first,
        closes=found.during.last,
        closed=found.closed,
        allowable=None if adopted is None else adopted.amount,
        reserve=0 if adopted is None else adopted.reserve,
        taken=sum(amount for _, amount in daily),
        daily=tuple(DayTake(day=day, amount=amount) for day, amount in daily),
        findings=findings,
        cases=open_cases,
        advice=None if made is None else made.advice,
    )


def few(count: int) -> str:
    """Return a count as others may read it: below five it would point at somebody."""
    return "few" if 0 < count < FEW else str(count)


def _counts(
    commons_id: int, season: seasons.SeasonRecord
) -> tuple[Mapping[str, int], Mapping[str, int]]:
    standing = [
        record
        for record in judgement.latest(commons_id=commons_id, during=[season.during]).values()
        if record.standing and record.finding.key.resource in ("", season.resource)
    ]
    found = cases.cases(commons_id=commons_id, findings=[each.number for each in standing])
    return (
        Counter(record.finding.key.clause for record in standing),
        Counter(str(case.so_far.state).replace("_", " ") for case in found),
    )
