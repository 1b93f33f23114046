"""Risk rows and fans, against a plain loop over draws and seasons written out here."""

import dataclasses
import statistics

import numpy as np
import pytest

from governance.regeneration import draws, growth, projection, prospects, rules
from tests.governance.regeneration import test_draws

GROW_FIRST = growth.Order.GROW_THEN_TAKE
RULE = rules.HockeyStick(
    limit=40,
    trigger=120,
    fraction=growth.HarvestFraction(of_biomass=0.15),
    ramp=rules.Ramp.FROM_LIMIT,
)


def albacore_ahead(*, count: int = 400, seasons: int = 5) -> prospects.Prospects:
    held = draws.plausible(
        fit=test_draws.albacore_fit(), draws=count, generator=np.random.default_rng(2)
    )
    return prospects.drawn(
        draws=held, seasons=seasons, process_sd=0.15, generator=np.random.default_rng(3)
    )


def limits(ahead: prospects.Prospects) -> np.ndarray:
    return 0.2 * ahead.draws.K


def rule_take(biomass: float) -> float:
    return 0.15 * min(max((biomass - 40) / 80, 0), 1) * biomass


def counted_by_hand(ahead: prospects.Prospects, candidate: float | None) -> projection.RiskRow:
    seasons, count = ahead.luck.shape
    below = np.zeros((seasons, count), bool)
    short = np.zeros(count, bool)
    biomass = np.zeros((seasons, count))
    taken, cuts = 0.0, 0
    for draw in range(count):
        r, K = float(ahead.draws.r[draw]), float(ahead.draws.K[draw])
        now = float(ahead.draws.biomass[draw])
        for season in range(seasons):
            wanted = rule_take(now) if candidate is None else candidate
            there = max(now + r * now * (1 - now / K), 0.0)
            got = min(wanted, there)
            short[draw] |= got < wanted
            taken += got
            now = (there - got) * float(ahead.luck[season, draw])
            if season == 0:
                cuts += rule_take(now) < wanted
            biomass[season, draw] = now
            below[season, draw] = now < 0.2 * K
    by_season = below.sum(axis=1) / count
    means = biomass.mean(axis=1)
    return projection.RiskRow(
        candidate=candidate,
        below_by_season=tuple(by_season.tolist()),
        below_ever=below.any(axis=0).sum() / count,
        below_at_end=by_season[-1],
        end_median=statistics.median(biomass[-1].tolist()),
        short_ever=short.sum() / count,
        cut_next=cuts / count,
        mean_take=taken / count / seasons,
        lowest_season=int(means.argmin()),
        lowest_biomass=means.min(),
    )


def assert_same(found: projection.RiskRow, expected: projection.RiskRow) -> None:
    exact = ("candidate", "lowest_season", "below_by_season", "below_ever", "below_at_end")
    for name in (*exact, "short_ever", "cut_next"):
        assert getattr(found, name) == getattr(expected, name), name
    assert found.end_median == pytest.approx(expected.end_median, rel=1e-9)
    assert found.mean_take == pytest.approx(expected.mean_take, rel=1e-9)
    assert found.lowest_biomass == pytest.approx(expected.lowest_biomass, rel=1e-9)


def table(ahead: prospects.Prospects, *candidates: float) -> tuple[projection.RiskRow, ...]:
    return projection.under_takes(
        ahead=ahead, candidates=candidates, rule=RULE, limit=limits(ahead), order=GROW_FIRST
    )


class TestUnderTakes:
    def test_counts_what_a_plain_loop_counts(self) -> None:
        ahead = albacore_ahead()
        rows = table(ahead, 0.0, 12.0, 25.0, 60.0)
        for row in rows:
            assert_same(row, counted_by_hand(ahead, row.candidate))
        # The cases are such that each count is seen at neither end.
        assert 0 < rows[1].below_ever < rows[2].below_ever < 1
        assert 0 < rows[2].short_ever < 1
        assert rows[0].cut_next == 0 < rows[1].cut_next < 1
        assert rows[0].mean_take == 0

    def test_taking_more_never_lowers_the_risk(self) -> None:
        rows = table(albacore_ahead(), *np.linspace(0, 40, 12).tolist())
        for name in ("below_ever", "below_at_end", "short_ever", "cut_next"):
            chances = [getattr(row, name) for row in rows]
            assert chances == sorted(chances), name

    def test_a_row_does_not_depend_on_its_neighbours(self) -> None:
        ahead = albacore_ahead()
        assert table(ahead, 20.0)[0] == table(ahead, 5.0, 20.0, 35.0)[1]

    def test_one_seed_one_table(self) -> None:
        assert table(albacore_ahead(), 10.0, 20.0) == table(albacore_ahead(), 10.0, 20.0)

    def test_runs_of_draws_add_up(self, monkeypatch: pytest.MonkeyPatch) -> None:
        ahead = albacore_ahead()
        whole = table(ahead, 15.0, 30.0)
        monkeypatch.setattr(prospects, "_BLOCK", 96)
        for found, expected in zip(table(ahead, 15.0, 30.0), whole, strict=True):
            assert_same(found, expected)

    def test_one_limit_for_all_draws(self) -> None:
        ahead = albacore_ahead()
        for limit, expected in ((0.0, 0.0), (1e9, 1.0)):
            (row,) = projection.under_takes(
                ahead=ahead, candidates=[10.0], rule=RULE, limit=limit, order=GROW_FIRST
            )
            assert (row.below_ever, row.below_at_end) == (expected, expected)

    @pytest.mark.parametrize("candidate", [-1.0, float("nan"), float("inf")])
    def test_an_impossible_candidate_is_refused(self, candidate: float) -> None:
        with pytest.raises(prospects.ImpossibleProjection):
            table(albacore_ahead(), 10.0, candidate)


class TestUnderRule:
    def test_counts_what_a_plain_loop_counts(self) -> None:
        ahead = albacore_ahead()
        row = projection.under_rule(ahead=ahead, rule=RULE, limit=limits(ahead), order=GROW_FIRST)
        assert_same(row, counted_by_hand(ahead, None))
        assert 0 < row.cut_next < 1

    def test_constant_escapement_gives_the_highest_lasting_catch(self) -> None:
        """Reed 1979, J. Environ. Econ. Manage. 6:350-363: 500 once, then 100 a season."""
        many = np.full(200, 1.0)
        held = draws.Draws(
            p=1.0, r=0.4 * many, K=1000 * many, q=many, sigma=many, biomass=1000 * many,
            effective=200,
        )  # fmt: skip
        ahead = prospects.drawn(
            draws=held, seasons=5, process_sd=0, generator=np.random.default_rng(0)
        )
        row = projection.under_rule(
            ahead=ahead,
            rule=rules.ConstantEscapement(escapement=500),
            limit=500,
            order=growth.Order.TAKE_THEN_GROW,
        )
        assert row.mean_take == pytest.approx((500 + 4 * 100) / 5)
        assert row.lowest_biomass == pytest.approx(600)
        assert (row.below_ever, row.short_ever, row.cut_next) == (0, 0, 1)


class TestFan:
    def test_bands_hold_the_middle_of_the_draws(self) -> None:
        """Of the numbers 0 to 1000 the middle half are 250 to 750, and so on."""
        paths = np.random.default_rng(1).permutation(np.arange(1001.0))[np.newaxis, :]
        found = projection.fan_of(np.vstack((paths, 2 * paths)))
        assert found.median == (500, 1000)
        edges = {0.50: (250, 750), 0.80: (100, 900), 0.95: (25, 975)}
        assert tuple(band.level for band in found.bands) == tuple(edges)
        for band in found.bands:
            low, high = edges[band.level]
            assert band.low == pytest.approx((low, 2 * low))
            assert band.high == pytest.approx((high, 2 * high))

    def test_begins_now_and_has_a_moment_for_every_season(self) -> None:
        ahead = albacore_ahead(seasons=5)
        for policy in (10.0, RULE):
            found = projection.fan(ahead=ahead, policy=policy, order=GROW_FIRST)
            assert len(found.median) == 6
            assert found.median[0] == np.median(ahead.draws.biomass)

    def test_a_rule_and_a_take_differ_as_their_takes_do(self) -> None:
        ahead = albacore_ahead()
        none, some = (
            projection.fan(ahead=ahead, policy=policy, order=GROW_FIRST) for policy in (0, 30.0)
        )
        never = projection.fan(
            ahead=ahead, policy=rules.ConstantEscapement(escapement=1e9), order=GROW_FIRST
        )
        assert none == never
        assert all(np.array(some.median[1:]) < none.median[1:])

    def test_runs_of_draws_make_the_same_fan(self, monkeypatch: pytest.MonkeyPatch) -> None:
        ahead = albacore_ahead()
        whole = projection.fan(ahead=ahead, policy=RULE, order=GROW_FIRST)
        monkeypatch.setattr(prospects, "_BLOCK", 96)
        assert projection.fan(ahead=ahead, policy=RULE, order=GROW_FIRST) == whole

    def test_is_not_drawn_from_a_few(self) -> None:
        projection.fan_of(np.ones((3, 200)))
        with pytest.raises(prospects.TooFewDraws):
            projection.fan_of(np.ones((3, 199)))

    def test_a_negative_take_is_refused(self) -> None:
        with pytest.raises(prospects.ImpossibleProjection):
            projection.fan(ahead=albacore_ahead(), policy=-1.0, order=GROW_FIRST)


def test_rows_are_frozen() -> None:
    (row,) = table(albacore_ahead(), 10.0)
    with pytest.raises(dataclasses.FrozenInstanceError):
        row.candidate = 1.0  # type: ignore[misc]
