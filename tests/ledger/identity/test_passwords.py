"""What a password must be; the borders are those of NIST SP 800-63B, revision 4."""

import pytest
from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError

from ledger.identity.models import Account

# The two keyboard runs stand in the published list of common passwords that Django carries.

ADA = Account(username="ada.7")


@pytest.mark.parametrize(
    "password",
    [
        "a heron in reed",
        "x" * 5 + "abcdefghijk",
        "тихая заводь у моста",
        "静かな湖のほとりの森の影から鳥",
        "a b c d e f g h " * 16,
        "1234 herons 5678 eels",
    ],
)
def test_a_long_password_of_any_script_is_accepted(password: str) -> None:
    """Fifteen code points suffice, and nothing is asked of which."""
    assert len(password) >= 15
    validate_password(password, ADA)


@pytest.mark.parametrize(
    "password",
    [
        "a heron in ree",
        "z" * 257,
        "my name is ada.7 here",
        "ADA.7 is my name, yes",
        "aaaaaaaaaaaaaaaaaaaa",
        "abababababababababab",
        "1q2w3e4r5t6y7u8i",
        "123456789987654321",
    ],
)
def test_a_password_that_others_would_try_is_refused(password: str) -> None:
    """Too short, too long, the account's name, or known to everybody who tries."""
    with pytest.raises(ValidationError):
        validate_password(password, ADA)
