"""How far a run has come, and how much work a unit should hold."""

from __future__ import annotations

import time
from dataclasses import dataclass

from starkiln.runner._folder import Part

#: Seconds of work that a unit should hold, so that little is lost and little is waited for.
_UNIT_SECONDS = 2.0
_MOST_ROWS = 5000


@dataclass(frozen=True)
class Progress:
    """How far a run has come.

    Attributes
    ----------
    done, total, rejected : int
        Rows.
    elapsed_s : float
        Since this command began.
    fresh : int
        Rows done by this command.
    """

    done: int
    total: int
    rejected: int
    elapsed_s: float
    fresh: int


class Tally:
    """What this command has done so far, and at what rate."""

    def __init__(self, todo: int, total: int, slots: int) -> None:
        self._begun, self._todo, self._total, self._slots = time.monotonic(), todo, total, slots
        self._fresh = self._rejected = 0

    def add(self, part: Part) -> Progress:
        """Count a part and return the progress after it."""
        self._fresh += len(part.results)
        self._rejected += sum(row["status"] == "rejected" for row in part.results)
        done = self._total - self._todo + self._fresh
        elapsed = time.monotonic() - self._begun
        return Progress(done, self._total, self._rejected, elapsed, self._fresh)

    @property
    def unit_rows(self) -> int:
        """Rows that a worker does in about `_UNIT_SECONDS`, at the rate so far."""
        rate = self._fresh / max(time.monotonic() - self._begun, 1e-9) / self._slots
        return min(max(1, int(rate * _UNIT_SECONDS)), _MOST_ROWS)
