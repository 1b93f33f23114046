"""What a move in a case is typed into."""

from typing import Any

from django import forms

from ledger.pages.cases.words import MOVES, SAID_BY

NUMBER_MAX = 2**31 - 1


class MoveForm(forms.Form):
    """One move: what it carries, and how many events its maker had read."""

    seen = forms.IntegerField(min_value=0, max_value=NUMBER_MAX, widget=forms.HiddenInput)
    move = forms.RegexField(r"^[a-z_]{1,40}$", widget=forms.HiddenInput)
    role = forms.RegexField(r"^[a-z_]{1,20}$", widget=forms.HiddenInput)
    member = forms.IntegerField(
        label="Number of the member who said it", min_value=1, max_value=NUMBER_MAX
    )
    officer = forms.IntegerField(
        label="Number of the case officer, who has no part in it",
        min_value=1,
        max_value=NUMBER_MAX,
    )
    reason = forms.CharField(
        label="In words", max_length=20_000, widget=forms.Textarea(attrs={"rows": 4})
    )
    on = forms.DateField(label="Day of handing over (year-month-day)")
    means = forms.CharField(label="By what means", max_length=60)
    proved = forms.BooleanField(label="Its arrival is proved", required=False)

    def __init__(self, *args: Any, carries: frozenset[str], names_member: bool, **kwargs: Any):
        """Keep the boxes that the move needs."""
        super().__init__(*args, **kwargs)
        kept = {"seen", "move", "role", *carries} | ({"member"} if names_member else set())
        if "delivery" in carries:
            kept |= {"on", "means", "proved"}
        for name in set(self.fields) - kept:
            del self.fields[name]

    @property
    def title(self) -> str:
        """Return what the form does, in words, and for whom."""
        role = str(self["role"].value())
        return MOVES[str(self["move"].value())] + SAID_BY.get(role, "")
