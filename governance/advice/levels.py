"""A book's references and rule, with the numbers of a fitted stock put in."""

from dataclasses import dataclass
from typing import ClassVar, assert_never

import numpy as np

from governance.bylaws import clauses
from governance.errors import StintbookError
from governance.quantities import decimal_text
from governance.regeneration import growth, rules
from governance.regeneration.growth import FloatArray


class UnknownReference(StintbookError):
    """A clause names a reference point that a stock has not, or that does not fit its place."""

    code: ClassVar[str] = "advice.unknown_reference"
    message: ClassVar[str] = "Found {found}; accepted is a multiple of {accepted}."


READINGS = {
    clauses.FortyTenReading.STRAIGHT_LINE_IN_CATCH: rules.Reading.LINE_IN_CATCH,
    clauses.FortyTenReading.RAMP_IN_FRACTION: rules.Reading.RAMP_IN_FRACTION,
}
ORDERS = {
    clauses.Sequence.TAKE_THEN_GROW: growth.Order.TAKE_THEN_GROW,
    clauses.Sequence.GROW_THEN_TAKE: growth.Order.GROW_THEN_TAKE,
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Levels:
    """What a book's references mean in a stock: biomass in the series' unit, a fraction of it."""

    K: float
    points: growth.ReferencePoints

    @classmethod
    def of(cls, model: growth.Growth) -> "Levels":
        """Return the levels of a model."""
        return cls(K=model.K, points=growth.reference_points(model))

    def biomass(self, reference: clauses.Reference) -> float:
        """Return the biomass that a reference names.

        :raises UnknownReference: if it names no biomass.
        """
        return float(self.biomass_of(reference, np.array([self.K]))[0])

    def biomass_of(self, reference: clauses.Reference, unfished: FloatArray) -> FloatArray:
        """Return the biomass that a reference names in stocks of the same shape, one for each K.

        :raises UnknownReference: if it names no biomass.
        """
        multiple = float(reference.multiple)
        match reference.of:
            case "K":
                return multiple * unfished
            case "Bmsy":
                return multiple * self.points.bmsy / self.K * unfished
            case _:
                raise UnknownReference(found=words(reference), accepted="K or Bmsy")

    def fraction(self, reference: clauses.Reference) -> growth.HarvestFraction:
        """Return the harvest fraction that a reference names.

        :raises UnknownReference: if it names none.
        """
        if reference.of != "Fmsy":
            raise UnknownReference(found=words(reference), accepted="Fmsy")
        of_biomass = float(reference.multiple) * self.points.fmsy.of_biomass
        return growth.HarvestFraction(of_biomass=of_biomass)

    def rule(self, rule: clauses.Rule) -> rules.Rule:
        """Return a book's rule with this stock's numbers.

        :raises UnknownReference: if a reference does not fit its place.
        """
        match rule:
            case clauses.HockeyStick():
                return rules.HockeyStick(
                    limit=self.biomass(rule.limit),
                    trigger=self.biomass(rule.trigger),
                    fraction=self.fraction(rule.fraction),
                    ramp=rules.Ramp.FROM_LIMIT,
                )
            case clauses.FortyTen():
                return rules.FortyTen(
                    unfished=self.K,
                    fraction=self.fraction(rule.fraction),
                    reading=READINGS[rule.reading],
                    lower=self.biomass(rule.lower) / self.K,
                    upper=self.biomass(rule.upper) / self.K,
                )
            case clauses.ConstantEscapement():
                return rules.ConstantEscapement(escapement=self.biomass(rule.leave))
            case _:
                assert_never(rule)


def words(reference: clauses.Reference) -> str:
    """Return a reference as a book writes it."""
    return f"{decimal_text(reference.multiple)} {reference.of}"


def limit_of(rule: clauses.Rule) -> clauses.Reference:
    """Return the level at or below which a rule allows nothing."""
    match rule:
        case clauses.HockeyStick():
            return rule.limit
        case clauses.FortyTen():
            return rule.lower
        case clauses.ConstantEscapement():
            return rule.leave
        case _:
            assert_never(rule)


def trigger_of(rule: clauses.Rule) -> clauses.Reference | None:
    """Return the level below which a rule lowers the fraction; None if it has none."""
    match rule:
        case clauses.HockeyStick():
            return rule.trigger
        case clauses.FortyTen():
            return rule.upper
        case clauses.ConstantEscapement():
            return None
        case _:
            assert_never(rule)
