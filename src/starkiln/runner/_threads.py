"""One thread of linear algebra: the matrices of one star are too small for more."""

from __future__ import annotations

from contextlib import AbstractContextManager
from functools import lru_cache
from typing import Any


def one_thread() -> AbstractContextManager:
    """Return a context in which BLAS and LAPACK use one thread.

    A second thread only waits for the first on matrices of this size (one star
    took eight times as long), and sums are then rounded alike whatever the number
    of cores.
    """
    return _controller().limit(limits=1)


@lru_cache(maxsize=1)
def _controller() -> Any:
    # Made once: it looks through the libraries that are loaded. scipy's must be among them.
    import scipy.linalg  # noqa: F401
    from threadpoolctl import ThreadpoolController

    return ThreadpoolController()
