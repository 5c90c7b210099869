"""The tree is as DEVELOPERS.md and the README say."""

from __future__ import annotations

import re
import subprocess
from pathlib import Path

import click
import pytest

from fieldlog.cli.main import main

ROOT = Path(__file__).resolve().parent.parent
ALLOWED_AT_TOP = {
    "README.md", "DEVELOPERS.md", "LICENSE", "pyproject.toml", "fieldlog", "templates", "static", "tests",
    "instance", ".ci", ".gitignore",
}  # fmt: skip


def tracked() -> list[str]:
    listing = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True)
    return listing.stdout.splitlines()


def test_nothing_stands_at_the_top_level_that_is_not_named() -> None:
    assert {name.partition("/")[0] for name in tracked()} <= ALLOWED_AT_TOP


def test_the_instance_folder_is_kept_empty() -> None:
    assert [name for name in tracked() if name.startswith("instance/")] == ["instance/.gitkeep"]


def test_every_module_stands_in_the_map_of_the_developers_document() -> None:
    text = (ROOT / "DEVELOPERS.md").read_text()
    named = set(re.findall(r"`(fieldlog/[\w/]+\.py)`", text))
    there = {name for name in tracked() if name.startswith("fieldlog/") and name.endswith(".py")}
    there = {name for name in there if not name.endswith("__init__.py")}
    assert named == there


def test_package_files_hold_nothing_but_a_docstring() -> None:
    for path in (ROOT / "fieldlog").rglob("__init__.py"):
        text = path.read_text().strip()
        assert re.fullmatch(r'"""[^"]+"""', text), path


@pytest.mark.parametrize("name", sorted(main.commands))
def test_every_command_is_in_the_readme(name: str) -> None:
    assert f"fieldlog {name}" in (ROOT / "README.md").read_text()


def test_every_command_has_a_help_text() -> None:
    for name, command in main.commands.items():
        assert isinstance(command, click.Command)
        assert command.help, name


def test_no_file_speaks_of_machine_paths_or_package_registries() -> None:
    bad = re.compile("/" + r"work/|/" + r"tmp/dev|index-" + r"url", re.IGNORECASE)
    for name in tracked():
        path = ROOT / name
        if path.suffix in {".py", ".md", ".toml", ".json", ".html", ".js", ".css", ""} and path.is_file():
            assert not bad.search(path.read_text(errors="replace")), name
