"""Where the work is done: in this process, or in a pool of them, behind one interface."""

from __future__ import annotations

import multiprocessing
import signal
from collections.abc import Callable
from concurrent.futures import Future, ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from typing import Any, Protocol

from starkiln.errors import StarkilnError


class Executor(Protocol):
    """What the runner needs of a pool."""

    slots: int

    def submit(self, function: Callable[..., Any], *args: Any) -> Future:
        """Start a call and return its future."""

    def stop(self, *, at_once: bool) -> None:
        """End the workers; `at_once` without waiting for what they do."""


class InlineExecutor:
    """Runs each call at once in this process."""

    slots = 1

    def submit(self, function: Callable[..., Any], *args: Any) -> Future:
        """Run the call and return its finished future."""
        future: Future = Future()
        try:
            future.set_result(function(*args))
        except Exception as error:  # handed over whole, as a pool would
            future.set_exception(error)
        return future

    def stop(self, *, at_once: bool) -> None:
        """Nothing to end."""


class PoolExecutor:
    """A pool of worker processes."""

    def __init__(self, workers: int) -> None:
        self.slots = workers
        self._pool = ProcessPoolExecutor(
            workers, multiprocessing.get_context("spawn"), initializer=_ignore_interrupt
        )

    def submit(self, function: Callable[..., Any], *args: Any) -> Future:
        """Start a call in a worker and return its future."""
        return self._pool.submit(function, *args)

    def stop(self, *, at_once: bool) -> None:
        """End the workers."""
        if at_once:
            for process in list((self._pool._processes or {}).values()):
                process.kill()
        self._pool.shutdown(wait=not at_once, cancel_futures=True)


def make_executor(workers: int) -> Executor:
    """Return a pool of `workers` processes, or this process for one."""
    return InlineExecutor() if workers == 1 else PoolExecutor(workers)


def outcome(future: Future) -> Any:
    """Return a future's result; say plainly when its worker was killed."""
    try:
        return future.result()
    except BrokenProcessPool as error:
        raise StarkilnError(
            "a worker process was killed (out of memory?); what was done is kept: run the same "
            "command again, with fewer --workers if memory is short"
        ) from error


def _ignore_interrupt() -> None:
    # Ctrl-C reaches the whole process group; only the parent decides what to do.
    signal.signal(signal.SIGINT, signal.SIG_IGN)
