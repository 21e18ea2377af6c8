"""Tests keep their tables in a folder of their own, never in the user's cache."""

from __future__ import annotations

import pytest


@pytest.fixture(autouse=True, scope="session")
def _own_cache(tmp_path_factory: pytest.TempPathFactory) -> object:
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("STARKILN_CACHE", str(tmp_path_factory.mktemp("cache")))
        yield
