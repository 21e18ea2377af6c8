"""Tests keep their tables of band fluxes in pytest's own cache, not in the home folder."""

from __future__ import annotations

import os


def pytest_configure(config):
    os.environ.setdefault("STARKILN_CACHE", str(config.cache.mkdir("starkiln")))
