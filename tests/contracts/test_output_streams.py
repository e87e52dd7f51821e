"""Streams that are closed or full: a plain message and a right exit status, never an internal error."""

import os
import subprocess
import sys
from pathlib import Path

CASE = Path(__file__).parents[2] / "cases" / "hum_notch" / "topology.toml"


def run(redirections, *arguments):
    """Run the command with a shell's redirections."""
    command = f'exec "$0" -m derive "$@" {redirections}'
    return subprocess.run(
        ["/bin/sh", "-c", command, sys.executable, *map(str, arguments)],
        stdin=subprocess.DEVNULL,
        capture_output=True,
        env={**os.environ, "PYTHONPATH": str(Path(__file__).parents[2])},
        text=True,
        check=False,
    )


def test_a_full_device_behind_standard_output_is_said_in_words():
    ended = run(">/dev/full", "show", CASE)
    assert ended.returncode == 2
    assert "the results cannot be printed: No space left on device" in ended.stderr
    assert "internal error" not in ended.stderr
    assert "Exception" not in ended.stderr


def test_a_closed_standard_output_or_error_does_no_harm():
    assert run(">&-", "show", CASE).returncode == 0
    assert run("2>&-", "show", CASE).returncode == 0
    bad = run("2>&-", "show", CASE.with_name("absent.toml"))
    assert (bad.returncode, bad.stdout) == (2, "")
