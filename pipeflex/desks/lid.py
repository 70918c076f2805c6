"""The line of a band whose content stands elsewhere in the desk, among that of other bands."""

from collections.abc import Callable
from typing import Any

from pipeflex.desks.entry import Fold


class Lid(Fold):
    """A line that opens and shuts.

    Parameters
    ----------
    changed : called when it has opened or shut.
    """

    kind = "band"

    def __init__(self, title: str, changed: Callable[[], Any], **values: Any) -> None:
        super().__init__(title, **values)
        self.observe(lambda _: changed(), "open")
