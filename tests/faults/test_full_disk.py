"""A full disk refuses cleanly, keeps what was acknowledged, and is left behind when there is room again."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

SCRIPT = Path(__file__).with_name("full_disk.py")


def test_a_full_disk_refuses_cleanly_and_recovers(tmp_path: Path) -> None:
    run = subprocess.run([sys.executable, str(SCRIPT), str(tmp_path)], capture_output=True, text=True, check=False)
    assert run.returncode == 0, run.stderr
    said = json.loads(run.stdout)
    assert said["error"] in {"StorageFullError", "StorageError"}
    assert "room" in said["message"]
    assert said["in_transaction"] is False
    assert said["acknowledged"] == said["stored"] == said["readable"] > 100
    assert said["again"] == said["error"]
    assert said["photo"] == "StorageFullError"
    assert said["backup"] in {"StorageFullError", "StorageError"}
    assert said["left"] == []
    assert (said["after"], said["fault"], said["integrity"]) == (said["stored"] + 70, None, "ok")
