"""The shapes of a sanction ladder and its steps."""

from typing import Any

from pydantic import field_validator, model_validator

from governance.bylaws import clauses, context, fields, shapes, spelling, tree
from governance.periods import DateRange


class Nothing(shapes.Shape):
    """A mapping that says nothing more: ``{}``."""


class Fine(shapes.Shape):
    """A flat sum, or a price for each unit of the breach with or without a cap."""

    flat: fields.Money | None = None
    per_excess: fields.Price | None = None
    at_most: fields.Money | None = None

    @model_validator(mode="after")
    def _one_way_to_reckon(self) -> "Fine":
        if (self.flat is None) == (self.per_excess is None):
            raise context.refusal(
                found="a fine with both or neither of them",
                accepted="either 'flat' or 'per_excess'",
            )
        if self.flat is not None and self.at_most is not None:
            raise context.refusal(accepted="a cap on 'per_excess' only", at="at_most")
        return self

    def record(self) -> clauses.Fine:
        """Return the step that this stands for."""
        return clauses.Fine(flat=self.flat, per_excess=self.per_excess, at_most=self.at_most)


class Suspension(shapes.Shape):
    """How long."""

    days: fields.Positive


class Step(shapes.Shape):
    """One step: exactly one of the keys stands."""

    warning: Nothing | None = None
    fine: Fine | None = None
    suspension: Suspension | None = None
    refer: fields.Name | None = None

    @model_validator(mode="before")
    @classmethod
    def _one_key(cls, data: Any) -> Any:
        """Refuse several sanctions in one step, and read a bare ``warning:`` as ``warning: {}``."""
        if not isinstance(data, tree.Mapping):
            return data
        if len(data) != 1:
            raise context.refusal(
                found=f"{len(data)} sanctions in one step",
                accepted=f"one of {spelling.choice(cls.keys())}",
            )
        return data.filled("warning")

    def record(self) -> clauses.Step:
        """Return the step that this stands for."""
        if self.fine is not None:
            return self.fine.record()
        if self.suspension is not None:
            return clauses.Suspension(days=self.suspension.days)
        if self.refer is not None:
            return clauses.Referral(body=self.refer)
        return clauses.Warning()


class Ladder(shapes.Shape):
    """Graduated steps; ``restore`` says what is given back at every one of them."""

    title: fields.Line
    text: fields.Paragraph | None = None
    window: fields.Days
    restore: fields.Restored = fields.Restore.NOTHING
    steps: list[Step]

    @field_validator("steps")
    @classmethod
    def _at_least_one(cls, steps: list[Step]) -> list[Step]:
        if not steps:
            raise context.refusal(found="an empty list", accepted="at least one step")
        return steps

    def fined_per(self) -> tuple[str, ...]:
        """Return the units that its fines are reckoned by."""
        fines = (step.fine for step in self.steps if step.fine is not None)
        return tuple(fine.per_excess.per for fine in fines if fine.per_excess is not None)

    def record(self, *, name: str, book: DateRange) -> clauses.SanctionLadder:
        """Return the clause that this stands for."""
        return clauses.SanctionLadder(
            head=clauses.Head(
                id=f"ladder.{name}",
                title=self.title,
                text=self.text or "",
                in_force=book,
                who=None,
                or_else=None,
            ),
            window_days=self.window,
            restore=self.restore is fields.Restore.EXCESS,
            steps=tuple(step.record() for step in self.steps),
        )
