"""`pullward board`: served for this computer only, refusals in one sentence, stopped cleanly."""

import contextlib
import http.client
import signal
import socket
import subprocess
import sys
import time

import pytest

from ergo.cli.main import main


def free_port():
    with socket.socket() as made:
        made.bind(("127.0.0.1", 0))
        return made.getsockname()[1]


def answer(port, path="/", host=None):
    with contextlib.closing(http.client.HTTPConnection("127.0.0.1", port, timeout=5)) as asked:
        asked.request("GET", path, headers={"Host": host or f"127.0.0.1:{port}"})
        got = asked.getresponse()
        return got.status, got.read()


@pytest.fixture
def served(tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path / "state"))
    port = free_port()
    command = [sys.executable, "-m", "ergo.cli.main", "board", "gasket_punch", "--port", str(port), "--no-browser"]
    process = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    for _ in range(150):
        try:
            answer(port)
            break
        except OSError:
            time.sleep(0.1)
    yield process, port
    if process.poll() is None:
        process.send_signal(signal.SIGINT)
        process.communicate(timeout=20)


def test_the_board_is_served_on_the_loopback_address_only(served):
    _, port = served
    assert answer(port)[0] == 200
    assert answer(port, host="evil.example")[0] == 403
    listening = subprocess.run(["cat", "/proc/net/tcp"], capture_output=True, text=True, check=True).stdout
    places = [line.split()[1] for line in listening.splitlines()[1:] if line.split()[3] == "0A"]
    assert f"0100007F:{port:04X}" in places
    assert f"00000000:{port:04X}" not in places


def test_ctrl_c_stops_it(served):
    process, port = served
    process.send_signal(signal.SIGINT)
    out, _ = process.communicate(timeout=20)
    assert process.returncode in (0, 130)
    assert f"http://127.0.0.1:{port}/" in out
    with pytest.raises(OSError):
        answer(port)


def test_a_port_that_is_taken_is_told(capsys, tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        assert main(["board", "--port", str(port), "--no-browser"]) == 3
    assert f"port {port} cannot be used" in capsys.readouterr().err


def test_a_folder_that_is_not_there_is_told(capsys):
    assert main(["board", "--folder", "no/such/folder", "--no-browser"]) == 3
    assert "there is no such folder" in capsys.readouterr().err


def test_a_study_that_is_not_there_is_told(capsys, tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    assert main(["board", "nothing.toml", "--no-browser"]) == 2
    assert "there is no such file" in capsys.readouterr().err
