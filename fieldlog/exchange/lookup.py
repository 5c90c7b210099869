"""What is on file, found by the name or uid that a file gives; nothing is made up and nothing is guessed."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from fieldlog.errors import InputError
from fieldlog.exchange.columns import folded_name


@dataclass(frozen=True, slots=True)
class Named:
    """One subject on file: the names it goes by, and the site it belongs to (none: the organisation's)."""

    names: tuple[str, ...]
    site: str | None = None
    supply: str | None = None  # of a system: the supply it is on

    @property
    def name(self) -> str:
        """The name to print."""
        return self.names[0] if self.names else ""


@dataclass(frozen=True, slots=True)
class Names:
    """The subjects on file by uid."""

    sites: Mapping[str, Named] = field(default_factory=dict)
    systems: Mapping[str, Named] = field(default_factory=dict)
    supplies: Mapping[str, Named] = field(default_factory=dict)
    gauges: Mapping[str, Named] = field(default_factory=dict)


class Lookup:
    """Finds subjects by name; built once a file. `noun` is one of site, system, supply, gauge."""

    def __init__(self, names: Names) -> None:
        self._subjects: dict[str, Mapping[str, Named]] = {
            "site": names.sites,
            "system": names.systems,
            "supply": names.supplies,
            "gauge": names.gauges,
        }
        self._by_name = {noun: _by_name(subjects) for noun, subjects in self._subjects.items()}

    def find(self, noun: str, typed: str, site: str | None = None) -> str:
        """Return the uid of the subject typed: of `site` where that is known, or one the organisation carries.

        Raises
        ------
        InputError
            If none or several go by that name there.
        """
        subjects = self._subjects[noun]
        as_uid = typed.strip().lower()
        found = [as_uid] if as_uid in subjects else self._by_name[noun].get(folded_name(typed), [])
        there = [uid for uid in found if site is None or subjects[uid].site in {site, None}]
        return self._one(noun, typed, there, site)

    def name(self, noun: str, uid: str) -> str:
        """Return the name to print."""
        return self._subjects[noun][uid].name or uid

    def site_of(self, noun: str, uid: str | None) -> str | None:
        """Return the site that a subject belongs to, if any."""
        return self._subjects[noun][uid].site if uid is not None else None

    def only_supply(self, system: str | None, site: str | None) -> str:
        """Return the supply that `system` is on, or the one supply of the site.

        Raises
        ------
        InputError
            If the system's is not on file and the site has none or several.
        """
        on = self._subjects["system"][system].supply if system is not None else None
        if on is not None:
            return on
        there = [uid for uid, supply in self._subjects["supply"].items() if supply.site == site]
        if len(there) == 1:
            return there[0]
        raise InputError(
            f"{len(there)} supplies are on file for the site; write the name of the one that was tested",
            field="supply",
        )

    def _one(self, noun: str, typed: str, found: list[str], site: str | None) -> str:
        if len(found) == 1:
            return found[0]
        where = f" on {self.name('site', site)}" if site is not None else ""
        if found:
            raise InputError(f"{len(found)} {noun} records{where} go by {typed!r}; write the uid of the one meant")
        raise InputError(
            f"no {noun}{where} goes by {typed!r}; mend the name, or enter the {noun} first and import again"
        )


def _by_name(subjects: Mapping[str, Named]) -> dict[str, list[str]]:
    found: dict[str, list[str]] = {}
    for uid, subject in subjects.items():
        for folded in {folded_name(name) for name in subject.names}:
            found.setdefault(folded, []).append(uid)
    return found
