"""Where the work is done: in this process, or in a pool of them, behind one interface."""

from __future__ import annotations

import contextlib
import multiprocessing
import os
import signal
import threading
import time
from collections.abc import Callable, Iterator
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
            workers,
            multiprocessing.get_context("spawn"),
            initializer=_begin_worker,
            initargs=(os.getpid(),),
        )

    def submit(self, function: Callable[..., Any], *args: Any) -> Future:
        """Start a call in a worker and return its future."""
        with _interrupts_held():
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


@contextlib.contextmanager
def _interrupts_held() -> Iterator[None]:
    """Start worker processes deaf to Ctrl-C, which reaches the whole process group.

    It is held back, not dropped: this process gets it when the worker has started.
    """
    if not hasattr(signal, "pthread_sigmask"):
        yield
        return
    before = signal.pthread_sigmask(signal.SIG_BLOCK, {signal.SIGINT})
    try:
        yield
    finally:
        signal.pthread_sigmask(signal.SIG_SETMASK, before)


def _begin_worker(parent: int) -> None:
    """Leave Ctrl-C to the parent, and end when the parent has gone, however it went."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    threading.Thread(target=_follow, args=(parent,), daemon=True).start()


def _follow(parent: int) -> None:
    while os.getppid() == parent:
        time.sleep(1.0)
    os._exit(1)
