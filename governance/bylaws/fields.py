"""The types of the values in a book's shapes."""

import datetime
import enum
from fractions import Fraction
from typing import Annotated

from pydantic import PlainValidator

from governance import periods, quantities
from governance.bylaws import clauses, values


class OnlySeason(enum.StrEnum):
    """The one span that work is owed for."""

    SEASON = "season"


class Restore(enum.StrEnum):
    """What a ladder's first step already gives back."""

    EXCESS = "excess"
    NOTHING = "nothing"


class Observed(enum.StrEnum):
    """What the quota of a resource is advised from."""

    SURVEY = "survey"
    CATCH = "catch"


Line = Annotated[str, PlainValidator(values.line)]
Paragraph = Annotated[str, PlainValidator(values.paragraph)]
Name = Annotated[str, PlainValidator(values.name)]
ClauseId = Annotated[str, PlainValidator(values.clause_id)]
Zone = Annotated[str, PlainValidator(values.zone)]
Currency = Annotated[
    str,
    PlainValidator(values.listed(quantities.CURRENCY_PLACES, "an ISO 4217 code, such as 'EUR'")),
]
Unit = Annotated[str, PlainValidator(values.listed(quantities.UNITS, "a UCUM code, such as 'kg'"))]
Resource = Annotated[
    str, PlainValidator(values.declared("a resource", lambda known: known.resources))
]
Class = Annotated[str, PlainValidator(values.declared("a class", lambda known: known.classes))]
Ladder = Annotated[str, PlainValidator(values.declared("a ladder", lambda known: known.ladders))]
Whole = Annotated[int, PlainValidator(values.whole)]
Positive = Annotated[int, PlainValidator(values.positive)]
Decimal = Annotated[Fraction, PlainValidator(values.decimal)]
Percent = Annotated[Fraction, PlainValidator(values.percent)]
Amount = Annotated[quantities.Amount, PlainValidator(values.amount)]
Days = Annotated[int, PlainValidator(values.whole_time("d", "whole days, such as '14 d'"))]
Hours = Annotated[int, PlainValidator(values.whole_time("h", "whole hours, such as '48 h'"))]
Minutes = Annotated[
    int, PlainValidator(values.whole_time("min", "hours and minutes, such as '6 h'"))
]
Ceiling = Annotated[quantities.Amount | None, PlainValidator(values.ceiling)]
WorkingDays = Annotated[Fraction, PlainValidator(values.working_days)]
Money = Annotated[quantities.Money, PlainValidator(values.money)]
Price = Annotated[quantities.Price, PlainValidator(values.price)]
Day = Annotated[datetime.date, PlainValidator(values.day)]
DayOfYear = Annotated[tuple[int, int], PlainValidator(values.day_of_year)]
Stock = Annotated[clauses.Reference, PlainValidator(values.reference("K", "Bmsy"))]
HarvestFraction = Annotated[clauses.Reference, PlainValidator(values.reference("Fmsy"))]
Per = Annotated[periods.Per, PlainValidator(values.one_of(periods.Per))]
PerSeason = Annotated[OnlySeason, PlainValidator(values.one_of(OnlySeason))]
Restored = Annotated[Restore, PlainValidator(values.one_of(Restore))]
Observation = Annotated[Observed, PlainValidator(values.one_of(Observed))]
CountedBy = Annotated[clauses.CountedBy, PlainValidator(values.one_of(clauses.CountedBy))]
Basis = Annotated[clauses.Basis, PlainValidator(values.one_of(clauses.Basis))]
Rounding = Annotated[clauses.Apportionment, PlainValidator(values.one_of(clauses.Apportionment))]
Growth = Annotated[clauses.Growth, PlainValidator(values.one_of(clauses.Growth))]
Order = Annotated[clauses.Sequence, PlainValidator(values.one_of(clauses.Sequence))]
FortyTenReading = Annotated[
    clauses.FortyTenReading, PlainValidator(values.one_of(clauses.FortyTenReading))
]
