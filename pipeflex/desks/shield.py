"""No fault of a desk stays hidden.

JupyterLab shows nothing of an exception in a widget's callback.  Whatever a desk does on an event goes
through `shielded`: the fault is logged in full and told in the desk.
"""

from __future__ import annotations

import functools
import logging
from collections.abc import Callable
from typing import Any, ParamSpec, TypeVar

P = ParamSpec("P")
R = TypeVar("R")

logger = logging.getLogger(__name__)


def shielded(act: Callable[P, R], problem: Callable[[Exception], Any]) -> Callable[P, R | None]:
    """Wrap a callback so that an exception is logged and handed to ``problem``; it then returns None."""

    @functools.wraps(act)
    def attempt(*args: P.args, **kwargs: P.kwargs) -> R | None:
        try:
            return act(*args, **kwargs)
        except Exception as error:
            logger.exception("%s failed", getattr(act, "__qualname__", act))
            problem(error)
            return None

    return attempt
