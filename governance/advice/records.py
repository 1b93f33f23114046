"""The records of an advice: what was known, what is proposed, and at what risk."""

from dataclasses import dataclass
from datetime import date


@dataclass(frozen=True, slots=True, kw_only=True)
class EstimateRow:
    """A number about the resource with its interval, for reading only.

    ``unit`` is the unit that the value is already in (``1`` for a plain number, ``1/a`` for a
    yearly rate); ``low`` and ``high`` bound it with the chance that the advice states, or are None.
    """

    name: str
    meaning: str
    value: float
    low: float | None
    high: float | None
    unit: str


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskRow:
    """One candidate allowable and what the runs say of it; amounts in base units, chances 0 to 1.

    ``label`` is empty or a word such as "proposed" or "as now". ``breaks`` says that the chance
    passes what the book accepts.
    """

    candidate: int
    label: str
    chance_below: float
    chance_cut: float
    mean_take: int
    end_median: int
    breaks: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskTable:
    """The candidates under the same runs, and the question that the book asks of them.

    ``limit`` is the level in base units, ``limit_words`` what it is ("a fifth of the stock without
    any take"); ``at_most`` is the chance that the book accepts (None where it names none) of being
    below it within ``horizon_years``; ``cut_words`` says what a row's ``chance_cut`` is the chance
    of ("the next allowable is lower"). A candidate is taken every season whatever comes;
    ``under_rule`` is the chance of ever being below the level where the book's rule sets the take
    anew each season from the stock as it then is.
    """

    limit: int
    limit_words: str
    cut_words: str
    horizon_years: int
    at_most: float | None
    runs: int
    under_rule: float
    rows: tuple[RiskRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class SurveyRiskRow:
    """One candidate allowable, and the chance that it is more than the book's rate of the stock.

    The candidate is in base units; ``label`` is empty or a word such as "proposed".
    """

    candidate: int
    label: str
    chance_above: float


@dataclass(frozen=True, slots=True, kw_only=True)
class SurveyRisk:
    """What the survey's own error means for the candidates.

    ``rate`` is the book's, in percent as words; ``found`` what stands on the open grounds, in base
    units; ``variation`` the survey's coefficient of variation over all of them.
    """

    rate: str
    found: int
    variation: float
    rows: tuple[SurveyRiskRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class YearBand:
    """The stock at the start of one year over the runs, in base units: median and three bands."""

    year: int
    median: int
    low_50: int
    high_50: int
    low_80: int
    high_80: int
    low_95: int
    high_95: int


@dataclass(frozen=True, slots=True, kw_only=True)
class ObservedStock:
    """One year's observation, scaled to the stock, in base units."""

    year: int
    amount: int


@dataclass(frozen=True, slots=True, kw_only=True)
class StockHistory:
    """The stock by year: estimated up to ``first_projected``, then projected under the rule.

    Amounts in base units. ``limit`` is the lowest level that the book accepts, ``trigger`` the one
    below which its rule lowers the take; None where the rule has none.
    """

    bands: tuple[YearBand, ...]
    observed: tuple[ObservedStock, ...]
    first_projected: int
    limit: int | None
    trigger: int | None
    runs: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Advice:
    """What is proposed for one resource's next season, and why.

    ``clause`` is the quota clause; ``method``, ``model`` and ``rule`` are words. ``present`` and
    ``proposed`` are allowables in base units, ``before_bounds`` what the rule alone gave, and
    ``bounds`` says in words which bounds moved it. ``interval`` words the chance of the intervals.
    ``runs`` and ``seed`` repeat the calculation; a method without chance has neither.
    """

    resource: str
    clause: str
    season: str
    method: str
    model: str
    data_first_year: int
    data_last_year: int
    interval: str
    estimates: tuple[EstimateRow, ...]
    reference_points: tuple[EstimateRow, ...]
    rule: str
    present: int
    before_bounds: int
    proposed: int
    bounds: tuple[str, ...]
    risk: RiskTable | None
    survey_risk: SurveyRisk | None
    stock: StockHistory | None
    reasons: tuple[str, ...]
    cautions: tuple[str, ...]
    runs: int | None
    seed: int | None
    made_on: date
