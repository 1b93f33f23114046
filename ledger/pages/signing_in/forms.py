"""What is typed to get in: a card with a new password, and the name of a device."""

from typing import Any

from django import forms
from django.contrib.auth import password_validation

from ledger.identity import operations as identity

SCOPE_WORDS = {
    identity.READ: "read the book",
    identity.RECORD: "record entries",
    identity.MOVE_CASES: "move cases",
}


class CardForm(forms.Form):
    """A card, and the password that its holder chooses."""

    card = forms.CharField(
        label="What stands on the card",
        max_length=100,
        widget=forms.TextInput(attrs={"autocomplete": "off", "autocapitalize": "none"}),
    )
    password = forms.CharField(
        label="New password",
        max_length=1000,
        strip=False,
        widget=forms.PasswordInput(attrs={"autocomplete": "new-password"}),
    )
    again = forms.CharField(
        label="The same once more",
        max_length=1000,
        strip=False,
        widget=forms.PasswordInput(attrs={"autocomplete": "new-password"}),
    )

    def clean(self) -> dict[str, Any]:
        """Return the checked fields: both passwords alike, and one that holds."""
        found: dict[str, Any] = super().clean() or {}
        password = found.get("password")
        if password is not None and found.get("again") not in (None, password):
            self.add_error("again", "The two differ; type the same password in both places.")
        elif password is not None:
            try:
                password_validation.validate_password(password)
            except forms.ValidationError as error:
                self.add_error("password", error)
        return found


class DeviceForm(forms.Form):
    """A device that is to have a token, and what it may do."""

    device = forms.CharField(label="Name of the device", max_length=identity.DEVICE_SIGNS)
    scopes = forms.MultipleChoiceField(
        label="It may",
        choices=list(SCOPE_WORDS.items()),
        initial=[identity.READ, identity.RECORD],
        widget=forms.CheckboxSelectMultiple,
    )
