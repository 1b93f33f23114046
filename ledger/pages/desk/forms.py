"""The form of a slip: what is asked, and how it becomes the slip that the book takes."""

from collections.abc import Iterator
from datetime import datetime
from typing import Any
from zoneinfo import ZoneInfo

from django import forms
from django.utils.crypto import get_random_string

from ledger.commons import queries as commons
from ledger.movements.operations import Line, Slip
from ledger.pages.desk import fields
from ledger.web.visitors import Visitor

LINES = 4
_NO_SUCH_TIME = "On that day the clocks skipped this time; an earlier or a later one is accepted."


def text(**attributes: Any) -> forms.TextInput:
    """Return a plain box that no browser fills in by itself."""
    return forms.TextInput(attrs={"autocomplete": "off", **attributes})


class SlipForm(forms.Form):
    """A landing slip as it lies on the desk.

    The fields come in the order in which a pile of slips is typed: what differs from slip to slip
    first, and then what is mostly as on the slip before.
    """

    member = fields.NumberField(
        label="Member number",
        widget=text(inputmode="numeric", autofocus=True, **{"aria-describedby": "echo"}),
        error_messages={"required": "The number of the member is needed, such as 7."},
    )
    slip = forms.CharField(
        label="Slip number",
        max_length=60,
        required=False,
        widget=text(),
        help_text="Where there is no paper slip, leave it empty.",
        error_messages={"max_length": "A slip number of at most 60 signs is accepted."},
    )
    taken_on = fields.DayField(
        label="Day of the take",
        widget=text(inputmode="numeric"),
        error_messages={"required": "The day of the take is needed, such as 2026-03-02."},
    )
    taken_time = fields.TimeField(
        label="Time of the take",
        widget=text(inputmode="numeric"),
        error_messages={"required": "The time of the take is needed, such as 06:30."},
    )
    handed_on = fields.DayField(
        label="Day handed in",
        widget=text(inputmode="numeric"),
        error_messages={"required": "The day is needed, such as 2026-03-02."},
    )
    handed_time = fields.TimeField(
        label="Time handed in",
        widget=text(inputmode="numeric"),
        error_messages={"required": "The time is needed, such as 18:00."},
    )
    draw_point = forms.CharField(
        label="Draw point",
        max_length=120,
        required=False,
        widget=text(),
        help_text="Empty: the member's own.",
        error_messages={"max_length": "A draw point of at most 120 signs is accepted."},
    )
    note = forms.CharField(
        label="Note",
        max_length=2000,
        required=False,
        widget=text(),
        error_messages={"max_length": "A note of at most 2,000 signs is accepted."},
    )
    key = forms.RegexField(
        r"^[A-Za-z0-9_-]{1,64}$", required=False, widget=forms.HiddenInput, label="Key"
    )

    def __init__(self, *args: Any, visitor: Visitor, now: datetime, **kwargs: Any) -> None:
        """Ask about the members, the resources and the zones of the visitor's commons."""
        super().__init__(*args, **kwargs)
        self.visitor, self.now = visitor, now
        commons_id = visitor.commons.commons_id
        self.members = commons.members(commons_id=commons_id)
        self.resources = commons.resources(commons_id=commons_id)
        self.zones = commons.zones(commons_id=commons_id)
        places = [
            (
                f"{resource.name}, {resource.unit}",
                [
                    (zone.code, f"{resource.unit} of {resource.name}, {zone.name}")
                    for zone in self.zones.values()
                    if zone.resource == resource.code
                ],
            )
            for resource in self.resources.values()
        ]
        for place in range(1, LINES + 1):
            self.fields[f"amount_{place}"] = fields.AmountField(
                label="Amount" if place == 1 else f"Amount, line {place}",
                required=place == 1,
                widget=text(inputmode="decimal"),
                error_messages={"required": "The amount is needed, such as 12.5."},
            )
            self.fields[f"place_{place}"] = forms.ChoiceField(
                label="Of what, and where" if place == 1 else f"Of what, line {place}",
                # Nothing is chosen before anybody chose: a wrong resource would be recorded.
                choices=[("", "Choose"), *places],
                error_messages={
                    "required": "One of the list is accepted.",
                    "invalid_choice": "One of the list is accepted.",
                },
                required=place == 1,
            )

    def full_clean(self) -> None:
        """Check everything, and have each box that is amiss say so to who cannot see it."""
        super().full_clean()
        for name in self.errors:
            if name in self.fields:
                self.fields[name].widget.attrs["aria-invalid"] = "true"
                self.fields[name].widget.attrs["aria-describedby"] = f"id_{name}_wrong"

    def lines(self) -> Iterator[tuple[forms.BoundField, forms.BoundField]]:
        """Yield the boxes of each further line."""
        for place in range(2, LINES + 1):
            yield self[f"amount_{place}"], self[f"place_{place}"]

    def has_lines(self) -> bool:
        """Return whether more than the first line was filled in."""
        return any(amount.value() for amount, _ in self.lines())

    def clean_key(self) -> str:
        """Return the key that the page was given, or a new one where it came without."""
        return self.cleaned_data["key"] or get_random_string(22)

    def clean_member(self) -> int:
        """Return the number of a member whose takes the visitor may record."""
        number: int = self.cleaned_data["member"]
        if not self.visitor.records_takes_of(number):
            raise forms.ValidationError(
                f"You can record your own takes, under number {self.visitor.member}."
                " The secretary records those of others."
            )
        if number not in self.members:
            raise forms.ValidationError(
                f"There is no member {number}; the numbers stand in the list of members."
            )
        return number

    def clean(self) -> dict[str, Any]:
        """Check the times, which nobody can have come to yet, and the lines."""
        given = self.cleaned_data
        for place in range(2, LINES + 1):
            if given.get(f"amount_{place}") is not None and not given.get(f"place_{place}"):
                self.add_error(f"place_{place}", "One of the list is accepted.")
        taken = self._instant("taken")
        handed = self._instant("handed")
        if taken is not None and handed is not None and handed < taken:
            self.add_error(
                "handed_time", "The time of the take or a later one is accepted; this is earlier."
            )
        given["taken_at"], given["handed_in"] = taken, handed
        return given

    def _instant(self, name: str) -> datetime | None:
        day, at = self.cleaned_data.get(f"{name}_on"), self.cleaned_data.get(f"{name}_time")
        if day is None or at is None:
            return None
        found = fields.instant(day, at, zone=self.visitor.commons.zone)
        if found is None:
            self.add_error(f"{name}_time", _NO_SUCH_TIME)
        elif found > self.now:
            today = self.visitor.commons.day_of(self.now)
            self.add_error(
                f"{name}_on" if day > today else f"{name}_time",
                f"This lies ahead of now; {local(self.now, self.visitor):%Y-%m-%d %H:%M} or"
                " earlier is accepted.",
            )
        return found

    def as_slip(self) -> Slip:
        """Return the slip that the book takes; only once the form holds."""
        given = self.cleaned_data
        own = given["member"] == self.visitor.member and not self.visitor.holds(
            "secretary", "monitor"
        )
        written = given["slip"]
        key = written or given["key"]
        return Slip(
            slip=written or f"page-{key[:12]}",
            member=given["member"],
            taken_at=given["taken_at"],
            handed_in=given["handed_in"],
            draw_point=given["draw_point"] or self.members[given["member"]].draw_point,
            note=given["note"],
            key=key,
            # At the desk the number on the paper is the key; what a member types at home is not.
            **({"device": f"{self.visitor.member}:page"} if own else {}),
            lines=tuple(self._lines()),
        )

    def _lines(self) -> Iterator[Line]:
        for place in range(1, LINES + 1):
            amount = self.cleaned_data.get(f"amount_{place}")
            if amount is None:
                continue
            zone = self.zones[self.cleaned_data[f"place_{place}"]]
            unit = self.resources[zone.resource].unit
            yield Line(resource=zone.resource, zone=zone.code, given=amount, unit=unit)


class ReasonForm(forms.Form):
    """Why an entry is undone."""

    reason = forms.CharField(
        label="Reason, in one line",
        max_length=300,
        widget=text(autofocus=True),
        error_messages={
            "required": "A reason is needed, such as: the amount was misread.",
            "max_length": "One line of at most 300 signs is accepted.",
        },
    )


def local(at: datetime, visitor: Visitor) -> datetime:
    """Return an instant by the clock of the visitor's commons."""
    return at.astimezone(ZoneInfo(visitor.commons.zone))
