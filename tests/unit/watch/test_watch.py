"""Watching a file: a real server on this machine, asked as a browser asks."""

import http.client
import json
import socket
import threading
import time
from contextlib import contextmanager

import pytest

from derive.errors import OutputError
from derive.watch.page import listening, message_page
from derive.watch.watch import watch

TOPOLOGY = """[sheet]
title = "Divider"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "3k", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per     = "V_s"
"""
PATIENCE = 60.0


class Watched:
    """A watch that runs beside the test, and what it said."""

    def __init__(self, file):
        self.file, self.said, self.ended = file, [], threading.Event()
        self.failed = []
        self._heard = threading.Condition()
        self.thread = threading.Thread(target=self._run, daemon=True)
        self.thread.start()
        self.hear(0)

    def _run(self):
        try:
            watch(str(self.file), 0, self._say, ended=self.ended, poll=0.05)
        except BaseException as error:  # noqa: BLE001 - told to the test
            self.failed.append(error)

    def _say(self, words):
        with self._heard:
            self.said.append(words)
            self._heard.notify_all()

    def hear(self, number):
        with self._heard:
            assert self._heard.wait_for(lambda: len(self.said) > number, timeout=PATIENCE), self.failed
            return self.said[number]

    @property
    def port(self):
        return int(self.said[0].partition("127.0.0.1:")[2].partition("/")[0])

    def get(self, path="/", **headers):
        connection = http.client.HTTPConnection("127.0.0.1", self.port, timeout=PATIENCE)
        connection.request("GET", path, headers=headers)
        answer = connection.getresponse()
        return answer.status, answer.read().decode("utf-8")

    @contextmanager
    def events(self):
        connection = http.client.HTTPConnection("127.0.0.1", self.port, timeout=PATIENCE)
        connection.request("GET", "/changes")
        yield connection.getresponse()
        connection.close()

    def end(self):
        self.ended.set()
        self.thread.join(PATIENCE)


@pytest.fixture
def watched(tmp_path):
    file = tmp_path / "stage.toml"
    file.write_text(TOPOLOGY, encoding="utf-8")
    found = Watched(file)
    yield found
    found.end()
    assert found.failed == []


def next_event(answer):
    """Read on to the next event of a stream, heartbeats left out."""
    while True:
        line = answer.readline().decode()
        assert line, "the stream has ended"
        if line.startswith("data: "):
            return json.loads(line.removeprefix("data: "))


def save(file, text):
    """Save as editors do: a new file in the place of the old one."""
    beside = file.with_suffix(".new")
    beside.write_text(text, encoding="utf-8")
    beside.replace(file)


def test_a_save_changes_the_page_and_an_error_is_shown_while_watching_goes_on(watched):
    assert "all checks passed" in watched.hear(1)
    status, page = watched.get()
    assert status == 200
    assert "0.75" in page
    assert 'new EventSource("/changes")' in page
    with watched.events() as stream:
        assert next_event(stream) == {"number": 1, "working": False}
        save(watched.file, TOPOLOGY.replace('"3k"', '"1k"'))
        assert "all checks passed" in watched.hear(2)
        events = [next_event(stream)]
        while events[-1]["number"] < 2:
            events.append(next_event(stream))
        assert events[-1] == {"number": 2, "working": False}
        assert "0.5" in watched.get()[1]
        save(watched.file, TOPOLOGY.replace('"out", "gnd"', '"ouy", "gnd"'))
        message = watched.hear(3)
        assert "stage.toml:7" in message
        page = watched.get()[1]
        assert 'role="alert"' in page
        assert "&quot;ouy&quot;" in page
        assert "const shown = 3" in page
        watched.file.unlink()
        assert "no such file" in watched.hear(4)
        save(watched.file, TOPOLOGY)
        assert "all checks passed" in watched.hear(5)


def test_only_this_machine_is_answered_and_only_the_page(watched):
    watched.hear(1)
    assert watched.get("/etc/passwd")[0] == 404
    assert watched.get("/../stage.toml")[0] == 404
    assert watched.get(Host="evil.example")[0] == 403
    assert watched.get(Host=f"localhost:{watched.port}")[0] == 200
    connection = http.client.HTTPConnection("127.0.0.1", watched.port, timeout=PATIENCE)
    connection.request("POST", "/", body="x")
    assert connection.getresponse().status == 501


def test_the_end_closes_streams_and_frees_the_port(watched):
    watched.hear(1)
    with watched.events() as stream:
        next_event(stream)
        port = watched.port
        begun = time.monotonic()
        watched.end()
        assert stream.read() == b"" or time.monotonic() - begun < PATIENCE
    with socket.socket() as again:
        again.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        again.bind(("127.0.0.1", port))


@pytest.mark.parametrize("port", [-1, 70_000])
def test_a_port_that_there_is_not_is_refused(port, tmp_path):
    with pytest.raises(OutputError, match="--port"):
        watch(str(tmp_path / "x.toml"), port, lambda words: None, ended=threading.Event())


def test_a_port_in_use_is_refused(tmp_path):
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        with pytest.raises(OutputError, match="cannot be used"):
            watch(str(tmp_path / "x.toml"), taken.getsockname()[1], lambda words: None)


def test_a_message_is_text_on_the_page_whatever_it_holds():
    page = message_page("<b>.toml", "<script>alert(1)</script>").decode()
    assert "<script>" not in page
    assert "&lt;script&gt;" in page


def test_the_listener_stands_at_the_end_of_the_last_body():
    page = listening(b"<html><body>&lt;/body&gt;</body></html>", 7).decode()
    assert page.index("const shown = 7") < page.index("</body>")
    assert page.endswith("</body></html>")
