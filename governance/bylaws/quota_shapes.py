"""The shape of a quota: how the next season's allowable of a resource is advised."""

from typing import Annotated, Literal

from pydantic import Field, ValidationInfo, field_validator, model_validator

from governance.bylaws import clauses, context, fields, shapes
from governance.periods import DateRange


class HockeyStick(shapes.Shape):
    """A ramp from a limit to a trigger."""

    kind: Literal["hockey_stick"]
    limit: fields.Stock
    trigger: fields.Stock
    fraction: fields.HarvestFraction

    @field_validator("trigger")
    @classmethod
    def _above_the_limit(
        cls, trigger: clauses.Reference, info: ValidationInfo
    ) -> clauses.Reference:
        return _above(info.data.get("limit"), trigger, "limit")

    def record(self) -> clauses.HockeyStick:
        """Return the rule that this stands for."""
        return clauses.HockeyStick(limit=self.limit, trigger=self.trigger, fraction=self.fraction)


class FortyTen(shapes.Shape):
    """A ramp between two levels, in one of its two readings."""

    kind: Literal["forty_ten"]
    lower: fields.Stock
    upper: fields.Stock
    fraction: fields.HarvestFraction
    reading: fields.FortyTenReading

    @field_validator("upper")
    @classmethod
    def _above_the_lower(cls, upper: clauses.Reference, info: ValidationInfo) -> clauses.Reference:
        return _above(info.data.get("lower"), upper, "lower level")

    def record(self) -> clauses.FortyTen:
        """Return the rule that this stands for."""
        return clauses.FortyTen(
            lower=self.lower, upper=self.upper, fraction=self.fraction, reading=self.reading
        )


class ConstantEscapement(shapes.Shape):
    """Whatever stands above a level."""

    kind: Literal["constant_escapement"]
    leave: fields.Stock

    def record(self) -> clauses.ConstantEscapement:
        """Return the rule that this stands for."""
        return clauses.ConstantEscapement(leave=self.leave)


class SurveyRate(shapes.Shape):
    """A part of what the survey found."""

    kind: Literal["survey_rate"]
    rate: fields.Percent

    def record(self) -> clauses.BySurvey:
        """Return the method that this stands for."""
        return clauses.BySurvey(rate=self.rate)


def _above(low: clauses.Reference | None, high: clauses.Reference, name: str) -> clauses.Reference:
    # Levels in different points of the stock can be compared only once a model is fitted.
    if low is not None and low.of == high.of and high.multiple <= low.multiple:
        raise context.refusal(accepted=f"a level above the {name}")
    return high


class ChangeAtMost(shapes.Shape):
    """How far the allowable may move from one season to the next."""

    up: fields.Percent | None = None
    down: fields.Percent | None = None
    unless_below: fields.Stock | None = None


class Risk(shapes.Shape):
    """What chance of lying too low is accepted."""

    below: fields.Stock
    at_most: fields.Percent

    def record(self) -> clauses.Risk:
        """Return the bound that this stands for."""
        return clauses.Risk(below=self.below, at_most=self.at_most)


class Review(shapes.Shape):
    """When the advice is made."""

    days_before_season: fields.Positive


class Confirm(shapes.Shape):
    """Who confirms it."""

    by: fields.Name
    approvals: fields.Positive


Rule = Annotated[
    HockeyStick | FortyTen | ConstantEscapement | SurveyRate, Field(discriminator="kind")
]


class Quota(shapes.Shape):
    """How the allowable is advised, bounded and confirmed."""

    title: fields.Line
    text: fields.Paragraph | None = None
    observe: list[fields.Observation]
    growth: fields.Growth | None = None
    shape: fields.Decimal | None = None
    order: fields.Order | None = None
    rule: Rule
    change_at_most: ChangeAtMost | None = None
    risk: Risk | None = None
    review: Review
    confirm: Confirm

    @model_validator(mode="after")
    def _parts_agree(self) -> "Quota":
        if isinstance(self.rule, SurveyRate):
            self._check_survey()
        else:
            self._check_growth()
        return self

    def _check_survey(self) -> None:
        self._check_observed({fields.Observed.SURVEY}, "'survey' alone")
        for key in ("growth", "shape", "order", "risk"):
            if getattr(self, key) is not None:
                raise context.refusal(
                    found=f"the key {key!r} beside a survey rate",
                    accepted="no such key, for no stock is modelled",
                    at=key,
                )
        if self.change_at_most is not None and self.change_at_most.unless_below is not None:
            raise context.refusal(
                found="the key 'unless_below' beside a survey rate",
                accepted="'up' and 'down', for no stock is modelled",
                at="change_at_most",
            )

    def _check_growth(self) -> None:
        observed = {fields.Observed.SURVEY, fields.Observed.CATCH}
        self._check_observed(observed, "'survey' and 'catch'")
        for key in ("growth", "order"):
            if getattr(self, key) is None:
                raise context.refusal(
                    found=f"no {key!r} beside a rule for a modelled stock",
                    accepted="'growth' and 'order' with every rule but 'survey_rate'",
                )
        bent = self.growth is clauses.Growth.PELLA_TOMLINSON
        if bent != (self.shape is not None):
            raise context.refusal(
                found=f"growth {self.growth} {'without' if bent else 'with'} a 'shape'",
                accepted="a 'shape' with pella_tomlinson, and only there",
                at="growth",
            )

    def _check_observed(self, observed: set[fields.Observed], accepted: str) -> None:
        if set(self.observe) != observed or len(self.observe) != len(observed):
            raise context.refusal(accepted=f"{accepted} with this rule", at="observe")

    def record(self, *, resource: str, book: DateRange) -> clauses.PoolTotal:
        """Return the clause that this stands for."""
        change = self.change_at_most
        return clauses.PoolTotal(
            head=clauses.Head(
                id=f"quota.{resource}",
                title=self.title,
                text=self.text or "",
                in_force=book,
                who=None,
                or_else=None,
            ),
            resource=resource,
            method=self._method(),
            up_at_most=None if change is None else change.up,
            down_at_most=None if change is None else change.down,
            unless_below=None if change is None else change.unless_below,
            risk=None if self.risk is None else self.risk.record(),
            review_days=self.review.days_before_season,
            confirm_by=self.confirm.by,
            approvals=self.confirm.approvals,
        )

    def _method(self) -> clauses.ByGrowthModel | clauses.BySurvey:
        if isinstance(self.rule, SurveyRate):
            return self.rule.record()
        assert self.growth is not None and self.order is not None, "the parts agree"
        return clauses.ByGrowthModel(
            growth=self.growth, shape=self.shape, sequence=self.order, rule=self.rule.record()
        )
