"""The root of the errors that the rules and the book raise on purpose."""

from typing import ClassVar


class StintbookError(Exception):
    """A request that is refused, with the facts of the refusal.

    A subclass states a ``code``, which programs may rely on, and a ``message`` whose braces name
    the facts that its raiser gives.
    """

    code: ClassVar[str] = "stintbook"
    message: ClassVar[str] = "The request was refused."

    def __init__(self, **facts: object) -> None:
        super().__init__(self.message.format(**facts))
        self.facts = facts
