"""Results handed to the other programs of the desk, over SAMP.

The standard profile of the Simple Application Messaging Protocol 1.3 (IVOA
recommendation 2012) is XML-RPC to a hub that a file describes; a program that only
sends needs no more than the standard library.
"""

from __future__ import annotations

import os
import xmlrpc.client
from pathlib import Path
from typing import Any
from urllib.error import URLError
from urllib.request import urlopen

from starkiln._version import __version__
from starkiln.errors import InputError, StarkilnError

_MTYPE = "table.load.votable"
_NO_HUB = "no SAMP hub runs: start a program that has one, such as a table viewer, and try again"


def send_table(path: str | Path, name: str) -> list[str]:
    """Send a VOTable to every program that listens for tables.

    The message is `table.load.votable`; only the file's address goes over the hub.

    Parameters
    ----------
    path : str or pathlib.Path
        The VOTable; it must stay where it is until the others have read it.
    name : str
        What the table shall be called there.

    Returns
    -------
    list of str
        Names of the programs that were told.

    Raises
    ------
    InputError
        The file is absent, or no program listens.
    StarkilnError
        No hub runs.
    """
    target = Path(path).resolve()
    if not target.is_file():
        raise InputError(f"{target} is no file; give a VOTable")
    lock = _lock()
    try:
        hub: Any = xmlrpc.client.ServerProxy(lock["samp.hub.xmlrpc.url"]).samp.hub
        key = str(hub.register(lock["samp.secret"])["samp.private-key"])
    except (KeyError, OSError, xmlrpc.client.Error) as error:
        raise StarkilnError(_NO_HUB) from error
    try:
        hub.declareMetadata(key, {"samp.name": "starkiln", "starkiln.version": __version__})
        return _tell_all(hub, key, {"url": target.as_uri(), "name": name})
    except (OSError, xmlrpc.client.Error) as error:
        raise StarkilnError(f"the SAMP hub did not take the message: {error}") from error
    finally:
        hub.unregister(key)


def _tell_all(hub: Any, key: str, params: dict[str, str]) -> list[str]:
    listeners = sorted(hub.getSubscribedClients(key, _MTYPE))
    if not listeners:
        raise InputError("the SAMP hub runs, but no program on it takes tables; start one")
    names = [str(hub.getMetadata(key, one).get("samp.name", one)) for one in listeners]
    for one in listeners:
        hub.notify(key, one, {"samp.mtype": _MTYPE, "samp.params": params})
    return names


def _lock() -> dict[str, str]:
    """Return what the hub's file says (SAMP 1.3, section 4.2)."""
    place = os.environ.get("SAMP_HUB", "")
    try:
        if place.startswith("std-lockurl:"):
            with urlopen(place.removeprefix("std-lockurl:"), timeout=10) as stream:
                text = stream.read().decode("utf-8", "replace")
        else:
            text = (Path.home() / ".samp").read_text(encoding="utf-8", errors="replace")
    except (OSError, URLError, ValueError) as error:
        raise StarkilnError(_NO_HUB) from error
    pairs = (line.split("=", 1) for line in text.splitlines() if "=" in line and line[0] != "#")
    return {key.strip(): value.strip() for key, value in pairs}
