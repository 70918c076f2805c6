"""What may follow the first answer: worked out beside the user's events, and dropped at the next one."""

import asyncio
from collections.abc import Callable, Sequence
from concurrent.futures import Executor, ThreadPoolExecutor
from contextlib import suppress
from functools import cache
from typing import Any, NamedTuple


class Step(NamedTuple):
    """After an idle time [s], `work` is done in a thread of its own; `then` takes what it returns, `fault` an error."""

    idle: float
    work: Callable[[], Any]
    then: Callable[[Any], None]
    fault: Callable[[Exception], None]


_tasks: set[asyncio.Task[None]] = set()


@cache
def _worker() -> Executor:
    return ThreadPoolExecutor(1, "pipeflex")


class Following:
    """Runs steps one after another; a new start, or a stop, forgets those that are not done.

    Results are taken in the thread that called `start`. Where no event loop runs there (a script, a test), `start`
    does all steps at once.
    """

    def __init__(self) -> None:
        self._under_way: tuple[asyncio.AbstractEventLoop, asyncio.Task[None]] | None = None

    def start(self, steps: Sequence[Step]) -> None:
        self.stop()
        try:
            loop = asyncio.get_running_loop()
        except RuntimeError:
            for step in steps:
                if not _taken(step):
                    return
            return
        task = loop.create_task(_run(loop, steps))
        _tasks.add(task)  # the loop itself holds on to no task
        task.add_done_callback(_tasks.discard)
        self._under_way = loop, task

    def stop(self) -> None:
        if self._under_way is not None:
            loop, task = self._under_way
            self._under_way = None
            with suppress(RuntimeError):  # the loop is closed: nothing runs any more
                loop.call_soon_threadsafe(task.cancel)


def _taken(step: Step) -> bool:
    try:
        step.then(step.work())
    except Exception as error:
        step.fault(error)
        return False
    return True


async def _run(loop: asyncio.AbstractEventLoop, steps: Sequence[Step]) -> None:
    for step in steps:
        await asyncio.sleep(step.idle)
        try:
            step.then(await loop.run_in_executor(_worker(), step.work))
        except Exception as error:
            step.fault(error)
            return
