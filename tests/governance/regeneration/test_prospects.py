"""Luck, refusals, and the carrying of draws against the models' own steps."""

import dataclasses

import numpy as np
import pytest

from governance.regeneration import draws, growth, prospects, rules
from governance.regeneration.growth import FloatArray
from tests.governance.regeneration import test_contracts

FIFTH = growth.HarvestFraction(of_biomass=0.2)


def stocks(*, p: float = 1.0, count: int = 300, effective: float | None = None) -> draws.Draws:
    generator = np.random.default_rng(5)
    one, K = np.ones(count), generator.uniform(180, 320, count)
    return draws.Draws(
        p=p,
        r=generator.uniform(0.1, 0.6, count),
        K=K,
        q=one,
        sigma=one.copy(),
        # Some far above K, where a stock falls by itself, and some nearly gone.
        biomass=K * generator.uniform(0.01, 4.0, count),
        effective=count if effective is None else effective,
    )


def drawn(
    held: draws.Draws, *, seasons: int = 6, process_sd: float = 0.0, seed: int = 1
) -> prospects.Prospects:
    return prospects.drawn(
        draws=held,
        seasons=seasons,
        process_sd=process_sd,
        generator=np.random.default_rng(seed),
    )


class TestDrawn:
    def test_luck_is_lognormal_with_mean_one(self) -> None:
        luck = drawn(stocks(count=20_000), seasons=10, process_sd=0.3).luck
        assert luck.shape == (10, 20_000)
        error = 0.3 / np.sqrt(luck.size)
        assert luck.mean() == pytest.approx(1, abs=6 * error)
        assert np.log(luck).std() == pytest.approx(0.3, rel=0.01)
        assert np.log(luck).mean() == pytest.approx(-0.045, abs=6 * error)

    def test_without_process_error_nothing_is_left_to_luck(self) -> None:
        assert (drawn(stocks()).luck == 1).all()

    def test_one_seed_one_luck(self) -> None:
        first, again = (drawn(stocks(), process_sd=0.2).luck for _ in range(2))
        np.testing.assert_array_equal(first, again)
        assert (first != drawn(stocks(), process_sd=0.2, seed=2).luck).any()

    def test_two_hundred_draws_are_enough_and_one_less_is_not(self) -> None:
        drawn(stocks(count=200))
        with pytest.raises(prospects.TooFewDraws):
            drawn(stocks(count=199))

    def test_many_draws_that_are_worth_few_are_refused(self) -> None:
        with pytest.raises(prospects.TooFewDraws):
            drawn(stocks(count=300, effective=199.0))

    def test_impossible_numbers(self) -> None:
        with pytest.raises(prospects.ImpossibleProjection):
            drawn(stocks(), seasons=0)
        with pytest.raises(prospects.ImpossibleProjection):
            drawn(stocks(), process_sd=-0.1)


def own_steps(
    held: draws.Draws, luck: FloatArray, policy: prospects.Policy, order: growth.Order
) -> tuple[list[list[float]], list[list[float]]]:
    """Carry each draw alone by growth.step; return biomass and taken by season."""
    biomasses, takens = [], []
    now = [float(each) for each in held.biomass]
    for season in range(len(luck)):
        taken = []
        for at in range(len(held)):
            start = np.array([now[at]])
            wanted = (
                np.array([policy])
                if isinstance(policy, int | float)
                else rules.take(rule=policy, biomass=start)
            )
            done = growth.step(
                model=growth.of_shape(r=float(held.r[at]), K=float(held.K[at]), p=held.p),
                biomass=start,
                take=wanted,
                order=order,
            )
            taken.append(float(done.taken[0]))
            now[at] = float(done.biomass[0]) * float(luck[season, at])
        biomasses.append(list(now))
        takens.append(taken)
    return biomasses, takens


@pytest.mark.parametrize("order", growth.Order)
@pytest.mark.parametrize("p", sorted({model.p for model in test_contracts.MODELS}))
@pytest.mark.parametrize(
    "policy",
    [
        0.0,
        25,
        90.0,
        rules.ConstantFraction(fraction=FIFTH),
        rules.ConstantEscapement(escapement=90),
    ],
    ids=str,
)
def test_carrying_many_is_carrying_each(
    policy: prospects.Policy, p: float, order: growth.Order
) -> None:
    held = stocks(p=p, count=200)
    ahead = drawn(held, seasons=4, process_sd=0.2)
    biomasses, takens = own_steps(held, ahead.luck, policy, order)
    (block,) = prospects.blocks(ahead)
    for season, passed in enumerate(prospects.seasons_of(block, policy, order)):
        np.testing.assert_allclose(passed.biomass, biomasses[season], rtol=1e-6, atol=1e-9)
        lack = np.zeros(200) if passed.lack is None else passed.lack
        np.testing.assert_allclose(passed.allowed + lack, takens[season], rtol=1e-6, atol=1e-9)


def test_blocks_hold_every_draw_once(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(prospects, "_BLOCK", 64)
    ahead = drawn(stocks(count=300))
    held = [block.rows for block in prospects.blocks(ahead)]
    covered = np.concatenate([np.arange(300)[rows] for rows in held])
    np.testing.assert_array_equal(covered, np.arange(300))
    assert len(held) == 5


def test_prospects_are_frozen() -> None:
    ahead = drawn(stocks())
    with pytest.raises(dataclasses.FrozenInstanceError):
        ahead.luck = ahead.luck  # type: ignore[misc]
    with pytest.raises(ValueError, match="read-only"):
        ahead.luck[0, 0] = 2
