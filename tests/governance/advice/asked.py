"""Requests for advice: the published albacore series, and a survey of clam grounds."""

from dataclasses import replace
from datetime import date
from fractions import Fraction

import numpy as np

from governance import facts
from governance.advice import making
from governance.advice.records import Advice
from governance.advice.request import Request
from governance.bylaws import clauses
from governance.periods import OPEN_END, DateRange
from tests.governance.regeneration import albacore

TONNES = clauses.ResourceUnits(resource="albacore", unit="t", base="kg")
KILOS = clauses.ResourceUnits(resource="clams", unit="kg", base="g")
HOCKEY_STICK = clauses.HockeyStick(
    limit=clauses.Reference(multiple=Fraction(1, 5), of="K"),
    trigger=clauses.Reference(multiple=Fraction(1, 2), of="K"),
    fraction=clauses.Reference(multiple=Fraction(4, 5), of="Fmsy"),
)


def by_model(
    *,
    rule: clauses.Rule = HOCKEY_STICK,
    growth: clauses.Growth = clauses.Growth.SCHAEFER,
    shape: Fraction | None = None,
    sequence: clauses.Sequence = clauses.Sequence.GROW_THEN_TAKE,
) -> clauses.ByGrowthModel:
    """Return the method: the published fit lets the stock grow before it is taken from."""
    return clauses.ByGrowthModel(growth=growth, shape=shape, sequence=sequence, rule=rule)


def quota(
    method: clauses.ByGrowthModel | clauses.BySurvey,
    *,
    resource: str = "albacore",
    up: Fraction | None = None,
    down: Fraction | None = None,
    unless_below: clauses.Reference | None = None,
    risk: clauses.Risk | None = None,
) -> clauses.PoolTotal:
    return clauses.PoolTotal(
        head=clauses.Head(
            id=f"quota.{resource}",
            title="How much",
            text="",
            in_force=DateRange(first=date(1950, 1, 1), until=OPEN_END),
            who=None,
            or_else=None,
        ),
        resource=resource,
        method=method,
        up_at_most=up,
        down_at_most=down,
        unless_below=unless_below,
        risk=risk,
        review_days=45,
        confirm_by="board",
        approvals=2,
    )


def reading(
    kind: str,
    year: int,
    value: Fraction | float | int,
    *,
    unit: str = "1",
    zone: str = "",
    error: Fraction | None = None,
    resource: str = "albacore",
) -> facts.Observation:
    return facts.Observation(
        entry=1,
        resource=resource,
        kind=kind,
        zone=zone,
        year=year,
        value=Fraction(str(value)),
        unit=unit,
        error=error,
    )


def albacore_readings() -> tuple[facts.Observation, ...]:
    """Return the published catches, in tonnes, and the published index."""
    catches = (
        reading("catch", year, Fraction(str(caught)) * 1000, unit="t")
        for year, caught in zip(albacore.YEARS, albacore.CATCHES, strict=True)
    )
    index = (
        reading("index", year, seen)
        for year, seen in zip(albacore.YEARS, albacore.INDEX, strict=True)
    )
    return (*catches, *index)


def albacore_request(
    clause: clauses.PoolTotal | None = None,
    *,
    observations: tuple[facts.Observation, ...] | None = None,
    present: int = 0,
    seed: int = 1,
) -> Request:
    """Return what is asked for the season of 1990."""
    return Request(
        clause=quota(by_model()) if clause is None else clause,
        units=TONNES,
        season="albacore-1990",
        year=1990,
        observations=albacore_readings() if observations is None else observations,
        catches={},
        present=present,
        zones=frozenset(),
        seed=seed,
        made_on=date(1990, 1, 15),
    )


def survey_request(
    *observations: facts.Observation,
    clause: clauses.PoolTotal | None = None,
    zones: frozenset[str] = frozenset({"north", "south"}),
    present: int = 0,
) -> Request:
    """Return what is asked for a season of clams in 2027."""
    method = clauses.BySurvey(rate=Fraction(15, 100))
    return Request(
        clause=quota(method, resource="clams") if clause is None else clause,
        units=KILOS,
        season="clams-2027",
        year=2027,
        observations=observations,
        catches={},
        present=present,
        zones=zones,
        seed=1,
        made_on=date(2027, 1, 15),
    )


def advised(request: Request) -> Advice:
    """Return the advice, with a generator made from the request's seed."""
    return making.advise(
        request=request, generator=np.random.Generator(np.random.PCG64(request.seed))
    )


def without(request: Request, *, kind: str, years: range | tuple[int, ...] = ()) -> Request:
    """Return a request that lacks readings of a kind: of some years, or of all."""
    kept = tuple(
        each
        for each in request.observations
        if each.kind != kind or (years and each.year not in years)
    )
    return replace(request, observations=kept)
