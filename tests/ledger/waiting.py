"""Two writers at once: the second looks at the book only once the first is done with it."""

import threading
from collections.abc import Callable

from django.db import connections, transaction


def one_after_the_other(*, first: Callable[[], object], second: Callable[[], object]) -> None:
    """Do one act, and let another begin before it is committed.

    What the other is refused for is raised here.
    """
    begun = threading.Event()
    failures: list[BaseException] = []

    def follow() -> None:
        begun.set()
        try:
            with transaction.atomic():
                second()
        except Exception as error:  # it is raised again by the one who waits
            failures.append(error)
        finally:
            connections["default"].close()

    follower = threading.Thread(target=follow)
    with transaction.atomic():
        first()
        follower.start()
        begun.wait()
        follower.join(timeout=0.3)
        assert follower.is_alive(), "the second act did not wait for the first"
    follower.join(timeout=20)
    assert not follower.is_alive()
    if failures:
        raise failures[0]
