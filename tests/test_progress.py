"""The progress bar: on standard error, on a terminal only, when the work is long."""

import io
import sys

from vibsym.cli.progress import counted, progress


class Terminal(io.StringIO):
    def isatty(self):
        return True


def test_a_long_loop_draws_a_bar_on_a_terminal(monkeypatch):
    monkeypatch.setattr(sys, "stderr", Terminal())
    monkeypatch.setenv("TERM", "xterm")
    assert list(counted(range(30), "structures", 20)) == list(range(30))
    assert "structures" in sys.stderr.getvalue()


def test_short_work_draws_nothing(monkeypatch):
    monkeypatch.setattr(sys, "stderr", Terminal())
    assert list(counted(range(5), "structures", 20)) == list(range(5))
    assert sys.stderr.getvalue() == ""


def test_a_pipe_gets_no_bar(monkeypatch):
    monkeypatch.setattr(sys, "stderr", io.StringIO())
    with progress("candidates", 1) as told:
        assert told is None
