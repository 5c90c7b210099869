"""Where an instance lives and what is in its folder; read once from the environment."""

from __future__ import annotations

import os
from dataclasses import dataclass
from importlib.metadata import version
from pathlib import Path


@dataclass(frozen=True, slots=True)
class Settings:
    """The folder of one instance and the paths in it."""

    instance: Path

    @property
    def database(self) -> Path:
        """The one SQLite file."""
        return self.instance / "fieldlog.sqlite"

    @property
    def keys(self) -> Path:
        """Folder of the organisation's sealing key and certificate (mode 0700)."""
        return self.instance / "keys"

    @property
    def files(self) -> Path:
        """Folder of photos and reports, named by their SHA-256."""
        return self.instance / "files"


def from_environment() -> Settings:
    """Return the settings: `FIELDLOG_INSTANCE`, else `instance/` in the working folder."""
    return Settings(Path(os.environ.get("FIELDLOG_INSTANCE", "instance")).absolute())


def program_version() -> str:
    """Return the version of the installed fieldlog."""
    return version("fieldlog")
