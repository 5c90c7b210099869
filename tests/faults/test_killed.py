"""Nothing that was acknowledged is lost when the writer is killed (the script can be run alone)."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

SCRIPT = Path(__file__).with_name("killed_writer.py")


@pytest.mark.slow
def test_two_hundred_kills_lose_and_double_nothing() -> None:
    run = subprocess.run([sys.executable, str(SCRIPT)], capture_output=True, text=True, check=False)
    assert run.returncode in {0, 1}, run.stderr
    counts = json.loads(run.stdout)
    wrong = {name: counts[name] for name in ("lost", "doubled", "torn_batches", "breaks", "waiting")}
    assert wrong == dict.fromkeys(wrong, 0)
    assert counts["acknowledged"] > 5 * counts["kills"]
    # Some kill must have come between the commit and its acknowledgement, or this looked at the wrong moments.
    assert counts["stored_but_not_acknowledged"] > 0
