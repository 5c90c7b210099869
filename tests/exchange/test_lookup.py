"""Names in a file find what is on file, on the right site, and never two at once."""

from __future__ import annotations

import pytest

from fieldlog.errors import InputError
from fieldlog.exchange.lookup import Lookup, Named, Names

HARBOUR, MILL = "00000000-0000-4000-8000-00000000000a", "00000000-0000-4000-8000-00000000000b"
LOOKUP = Lookup(
    Names(
        sites={HARBOUR: Named(("Harbour Cold Store", "HCS-7")), MILL: Named(("Old Mill",))},
        systems={
            "s1": Named(("Wet system 2",), HARBOUR),
            "s2": Named(("Wet system 2",), MILL),
            "s3": Named(("Dry system 3",), MILL),
        },
        gauges={"g1": Named(("Riser gauge",), HARBOUR), "g2": Named(("Test gauge T-9",))},
    )
)


@pytest.mark.parametrize("typed", ["Harbour Cold Store", " harbour  COLD_store", "hcs 7", HARBOUR.upper()])
def test_a_site_is_found_by_any_of_its_names_or_its_uid(typed: str) -> None:
    assert LOOKUP.find("site", typed) == HARBOUR


def test_the_same_name_on_two_sites_is_told_apart_by_the_site() -> None:
    assert LOOKUP.find("system", "wet system 2", HARBOUR) == "s1"
    assert LOOKUP.find("system", "wet system 2", MILL) == "s2"
    assert LOOKUP.find("system", "dry system 3") == "s3"
    with pytest.raises(InputError, match="2 system records go by"):
        LOOKUP.find("system", "wet system 2")


def test_a_system_of_another_site_is_not_taken() -> None:
    with pytest.raises(InputError, match="no system on Harbour Cold Store goes by 'Dry system 3'"):
        LOOKUP.find("system", "Dry system 3", HARBOUR)
    with pytest.raises(InputError, match="no system on Harbour Cold Store"):
        LOOKUP.find("system", "s3", HARBOUR)


def test_a_test_gauge_of_the_organisation_is_known_on_every_site() -> None:
    assert LOOKUP.find("gauge", "test gauge t-9", MILL) == "g2"
    with pytest.raises(InputError, match="no gauge"):
        LOOKUP.find("gauge", "Riser gauge", MILL)


def test_what_is_not_on_file_is_refused_with_its_mend() -> None:
    with pytest.raises(InputError, match="no site goes by 'New Mill'; mend the name, or enter the site first"):
        LOOKUP.find("site", "New Mill")


SUPPLIED = Lookup(
    Names(
        sites={HARBOUR: Named(("Harbour Cold Store",)), MILL: Named(("Old Mill",))},
        systems={"s1": Named(("Wet system 2",), HARBOUR, "p2"), "s2": Named(("Wet system 2",), MILL)},
        supplies={
            "p1": Named(("Street",), HARBOUR),
            "p2": Named(("Tank",), HARBOUR),
            "p3": Named(("Main",), MILL),
        },
    )
)


def test_the_supply_is_that_of_the_system_or_the_only_one_of_the_site() -> None:
    assert SUPPLIED.only_supply("s1", HARBOUR) == "p2"
    assert SUPPLIED.only_supply("s2", MILL) == "p3"
    assert SUPPLIED.only_supply(None, MILL) == "p3"
    with pytest.raises(InputError, match="2 supplies are on file"):
        SUPPLIED.only_supply(None, HARBOUR)
