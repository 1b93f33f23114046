"""The shapes of a book's parts as people write them; each gives the record it stands for.

A shape notes every key that it does not know and every key that is missing, so that one reading
reports them all. A misspelt key is reported once: as misspelt, not as missing too.
"""

import datetime
from collections import Counter
from typing import Annotated, Any, ClassVar

from pydantic import (
    BaseModel,
    ConfigDict,
    Field,
    PlainValidator,
    ValidationInfo,
    field_validator,
    model_validator,
)

from governance import quantities
from governance.bylaws import clauses, context, fields, spelling, tree
from governance.periods import OPEN_END, DateRange


class Shape(BaseModel):
    """A mapping with a known set of keys."""

    model_config = ConfigDict(extra="forbid", frozen=True)

    @classmethod
    def keys(cls) -> tuple[str, ...]:
        """Return the keys that the mapping may hold, as written."""
        return tuple(field.alias or name for name, field in cls.model_fields.items())

    @model_validator(mode="before")
    @classmethod
    def _note_keys(cls, data: Any, info: ValidationInfo) -> Any:
        if not isinstance(data, tree.Mapping):
            raise context.refusal(accepted=f"a mapping with the keys {spelling.choice(cls.keys())}")
        meant = _note_unknown_keys(cls, data, info)
        required = [f.alias or name for name, f in cls.model_fields.items() if f.is_required()]
        missing = [key for key in required if key not in data and key not in meant]
        if missing:
            context.reading_of(info).problems.add(
                at=data,
                found=f"no {spelling.choice(missing)}",
                accepted=f"{spelling.choice(required)} in every such mapping",
            )
        return data.only(cls.keys())


def _note_unknown_keys(shape: type[Shape], data: tree.Mapping, info: ValidationInfo) -> set[str]:
    """Note unknown keys; return the known ones that were probably meant."""
    meant: set[str] = set()
    for key in data:
        if key in shape.keys():
            continue
        near = spelling.nearest(key, [known for known in shape.keys() if known not in data])
        meant.update({near} if near else ())
        context.reading_of(info).problems.add(
            at=key,
            found=f"the key {spelling.quoted(key)}",
            accepted=f"one of {spelling.choice(shape.keys())}",
            nearest=near,
        )
    return meant


class InForce(Shape):
    """Days of force: ``until`` is the first day no longer in it."""

    from_: fields.Day = Field(alias="from")
    until: fields.Day | None = None

    @field_validator("until")
    @classmethod
    def _ends_later(cls, until: datetime.date, info: ValidationInfo) -> datetime.date:
        first = info.data.get("from_")
        if first is not None and until <= first:
            raise context.refusal(accepted=f"a day after the first, {first}")
        return until

    def days(self) -> DateRange:
        """Return the days as a range."""
        return DateRange(first=self.from_, until=self.until or OPEN_END)


class Votes(Shape):
    """How the vote went."""

    for_: fields.Whole = Field(alias="for")
    against: fields.Whole
    abstained: fields.Whole


class Adopted(Shape):
    """Who adopted the edition, and when."""

    by: fields.Name
    on: fields.Day
    votes: Votes

    def record(self) -> clauses.Adoption:
        """Return the adoption that this stands for."""
        return clauses.Adoption(
            by=self.by,
            on=self.on,
            votes_for=self.votes.for_,
            votes_against=self.votes.against,
            votes_abstained=self.votes.abstained,
        )


class ResourceUnits(Shape):
    """How a resource is measured."""

    unit: fields.Unit
    base: fields.Unit

    @field_validator("base")
    @classmethod
    def _makes_up_the_unit(cls, base: str, info: ValidationInfo) -> str:
        unit = info.data.get("unit")
        if unit is None:
            return base
        read, counted = quantities.unit(unit), quantities.unit(base)
        if read.measures != counted.measures or (read.size / counted.size).denominator != 1:
            raise context.refusal(accepted=f"a unit that {unit!r} is a whole number of")
        return base


class Who(Shape):
    """Whom a clause binds."""

    class_: fields.Class = Field(alias="class")


class Written(Shape):
    """A part that members read: its title and its text."""

    title: fields.Line
    text: fields.Paragraph


class ClauseShape(Written):
    """What every clause begins with.

    ``deontic`` is the key and the verb that the kind of clause must carry, if it binds or allows.
    """

    deontic: ClassVar[tuple[str, str] | None] = None

    id: fields.ClauseId
    kind: fields.Name
    in_force: InForce | None = None
    who: Who | None = None

    def head(self, *, book: DateRange) -> clauses.Head:
        """Return the clause's head; it is in force with the book where it does not say when."""
        return clauses.Head(
            id=self.id,
            title=self.title,
            text=self.text,
            in_force=book if self.in_force is None else self.in_force.days(),
            who=None if self.who is None else self.who.class_,
            or_else=self.ladder(),
        )

    def ladder(self) -> str | None:
        """Return the id of the ladder that follows a breach, if one does."""
        return None

    def counted_in(self, reading: context.Reading) -> str | None:
        """Return the unit that a breach of the clause is counted in, if it is known and counts."""
        return None

    def record(self, *, book: DateRange) -> clauses.Clause:
        """Return the clause that this stands for."""
        raise NotImplementedError


class BindingShape(ClauseShape):
    """A clause that can be broken."""

    or_else: fields.Ladder | None = None

    def ladder(self) -> str | None:
        """Return the id of the ladder that follows a breach, if one does."""
        return None if self.or_else is None else f"ladder.{self.or_else}"


def once_each(names: list[str]) -> list[str]:
    """Return names of which there is at least one, and none twice."""
    twice = [name for name, times in Counter(names).items() if times > 1]
    if twice:
        raise context.refusal(
            found=f"{spelling.choice(twice)} more than once", accepted="each name once"
        )
    if not names:
        raise context.refusal(found="an empty list", accepted="at least one name")
    return names


def _any(kind: type[tree.Sequence] | type[tree.Mapping], accepted: str) -> PlainValidator:
    def read(value: object) -> object:
        if not isinstance(value, kind):
            raise context.refusal(accepted=accepted)
        return value

    return PlainValidator(read)


class Cover(Shape):
    """The whole book; its clauses, ladders and quotas stay as written, to be read one by one."""

    book: fields.Line
    edition: fields.Positive
    adopted: Adopted
    in_force: InForce
    zone: fields.Zone
    money: fields.Currency
    resources: dict[fields.Name, ResourceUnits]
    clauses: Annotated[Any, _any(tree.Sequence, "a list of clauses")]
    ladders: Annotated[Any, _any(tree.Mapping, "a mapping from names to ladders")] = None
    quota: Annotated[Any, _any(tree.Mapping, "a mapping from resources to quotas")] = None

    @field_validator("in_force")
    @classmethod
    def _not_before_adoption(cls, in_force: InForce, info: ValidationInfo) -> InForce:
        adopted = info.data.get("adopted")
        if adopted is not None and in_force.from_ < adopted.on:
            raise context.refusal(
                accepted=f"a day not before the adoption on {adopted.on}", at="from"
            )
        return in_force
