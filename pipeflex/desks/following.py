"""What may follow the first answer: steps that run between the user's events, and give way to the next one."""

import asyncio
from collections.abc import Callable, Sequence
from typing import Any

Step = tuple[float, Callable[[], Any]]
"""How long nothing else must have happened [s], and what is then done."""


class Following:
    """Runs steps one after another, each once the kernel has been idle; a new start forgets those not yet run.

    Where no event loop runs (a script, a test) `start` runs all of them at once.
    """

    def __init__(self) -> None:
        self._waiting: asyncio.TimerHandle | None = None

    def start(self, steps: Sequence[Step]) -> None:
        self.stop()
        try:
            loop = asyncio.get_running_loop()
        except RuntimeError:
            for _, act in steps:
                act()
            return
        self._next(loop, list(steps))

    def stop(self) -> None:
        if self._waiting is not None:
            self._waiting.cancel()
            self._waiting = None

    def _next(self, loop: asyncio.AbstractEventLoop, steps: list[Step]) -> None:
        if not steps:
            self._waiting = None
            return
        (delay, act), *rest = steps

        def run() -> None:
            self._waiting = None
            act()
            if self._waiting is None:
                self._next(loop, rest)

        self._waiting = loop.call_later(delay, run)
