"""Where templates and static files are: in the installed package, else beside pyproject.toml in a checkout."""

from __future__ import annotations

from pathlib import Path

from fieldlog.errors import ConfigError

_PACKAGE = Path(__file__).resolve().parent


def asset_dir(name: str) -> Path:
    """Return the folder `name` ("templates", "static"), never one of the working directory.

    Raises
    ------
    ConfigError
        If neither place holds it.
    """
    packaged, checkout = _PACKAGE / name, _PACKAGE.parent / name
    if packaged.is_dir():
        return packaged
    if checkout.is_dir() and (_PACKAGE.parent / "pyproject.toml").is_file():
        return checkout
    raise ConfigError(f"no folder {name!r} at {packaged} or {checkout}; install fieldlog again")
