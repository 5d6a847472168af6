"""Worker processes behind the standard library's `Executor`, each task within its time.

A worker that dies or takes too long fails the task that it was at, and another takes its place.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import FIRST_COMPLETED, Executor, Future, wait
from itertools import islice
from multiprocessing import get_context, parent_process
from multiprocessing.connection import wait as wait_for_sentinel
from threading import Thread
from typing import Any, TypeVar

Item = TypeVar("Item")
Result = TypeVar("Result")

_WAITING_TASKS = 2
"""How many tasks are handed over for each worker: one that it is at and one to go on with."""


class Workers(Executor):
    """Processes that are started anew and import for themselves.

    Parameters
    ----------
    jobs : int
        How many there are at a time.
    limit_s : float
        Time that a task may take [s].
    start : callable
        Called once in each, before its first task.
    """

    def __init__(self, jobs: int, limit_s: float, start: Callable[..., None], *arguments: Any):
        from pebble import ProcessPool

        self.limit_s = limit_s
        self.pool: Any = ProcessPool(
            jobs,
            initializer=_start_worker,
            initargs=(start, arguments),
            context=get_context("spawn"),
        )

    def submit(self, function: Callable[..., Any], /, *arguments: Any, **named: Any) -> Future[Any]:
        """A task for the next worker that is free."""
        future: Future[Any] = self.pool.schedule(function, arguments, named, self.limit_s)
        return future

    def shutdown(self, wait: bool = True, *, cancel_futures: bool = False) -> None:
        """End the workers, after what was submitted or at once."""
        if cancel_futures or not wait:
            self.pool.stop()
        else:
            self.pool.close()
        self.pool.join()

    def __exit__(self, kind: type[BaseException] | None, *_: object) -> None:
        self.shutdown(cancel_futures=kind is not None)


class ThisProcess(Executor):
    """No worker: each task is done when it is submitted, and nothing limits it."""

    def __init__(self, start: Callable[..., None], *arguments: Any) -> None:
        start(*arguments)

    def submit(self, function: Callable[..., Any], /, *arguments: Any, **named: Any) -> Future[Any]:
        """The task, done."""
        future: Future[Any] = Future()
        try:
            future.set_result(function(*arguments, **named))
        except Exception as error:
            future.set_exception(error)
        return future


def _start_worker(start: Callable[..., None], arguments: tuple[Any, ...]) -> None:
    Thread(target=_end_with_parent, daemon=True).start()
    start(*arguments)


def _end_with_parent() -> None:
    """No worker outlives a program that was killed."""
    parent = parent_process()
    assert parent is not None
    wait_for_sentinel([parent.sentinel])
    os._exit(1)


def each_done(
    executor: Executor, jobs: int, function: Callable[[Item], Result], items: Iterable[Item]
) -> Iterator[tuple[Item, Future[Result]]]:
    """Each item with what became of it, as they are done; few are under way at a time."""
    left = iter(items)
    under_way: dict[Future[Result], Item] = {}

    def submit_more() -> None:
        room = max(1, _WAITING_TASKS * jobs) - len(under_way)
        for item in islice(left, room):
            under_way[executor.submit(function, item)] = item

    submit_more()
    while under_way:
        done, _ = wait(under_way, return_when=FIRST_COMPLETED)
        for future in done:
            yield under_way.pop(future), future
        submit_more()


def how_it_ended(error: Exception, limit_s: float) -> str:
    """What kept a worker from finishing, as a sentence."""
    if isinstance(error, TimeoutError):
        return f"it took more than {limit_s:g} s and was stopped"
    status = getattr(error, "exitcode", None)
    if status is None:
        return f"the worker process failed: {type(error).__name__}: {str(error)[:80]}"
    return f"the worker process was ended from outside (status {status})"
