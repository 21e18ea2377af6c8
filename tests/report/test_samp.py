"""Results over SAMP, to a hub and a client of astropy's on the loopback address."""

import threading
import warnings

import pytest

with warnings.catch_warnings():
    # astropy's hub is on its way to another package; it is the outside check here.
    warnings.simplefilter("ignore")
    from astropy.samp import SAMPHubServer, SAMPIntegratedClient

from starkiln.errors import InputError, StarkilnError
from starkiln.report import send_table


@pytest.fixture
def lockfile(tmp_path, monkeypatch):
    path = tmp_path / "hub.lock"
    monkeypatch.setenv("SAMP_HUB", f"std-lockurl:{path.as_uri()}")
    return path


@pytest.fixture
def hub(lockfile):
    server = SAMPHubServer(web_profile=False, lockfile=str(lockfile), addr="127.0.0.1")
    server.start()
    yield server
    server.stop()


@pytest.fixture
def table(tmp_path):
    path = tmp_path / "results.vot"
    path.write_text("<VOTABLE/>")
    return path


def test_a_listener_receives_the_address(hub, table):
    seen, arrived = {}, threading.Event()

    def receive(private_key, sender_id, mtype, params, extra):
        seen.update(params)
        arrived.set()

    about = {"samp.name": "viewer"}
    listener = SAMPIntegratedClient(name="viewer", metadata=about, addr="127.0.0.1")
    listener.connect()
    try:
        listener.bind_receive_notification("table.load.votable", receive)
        assert send_table(table, "my run") == ["viewer"]
        assert arrived.wait(10)
    finally:
        listener.disconnect()
    assert seen == {"url": table.as_uri(), "name": "my run"}


def test_nobody_listens(hub, table):
    with pytest.raises(InputError, match="no program on it takes tables"):
        send_table(table, "my run")


def test_no_hub(lockfile, table):
    with pytest.raises(StarkilnError, match="no SAMP hub runs"):
        send_table(table, "my run")


def test_no_file(tmp_path):
    with pytest.raises(InputError, match="is no file"):
        send_table(tmp_path / "absent.vot", "my run")
