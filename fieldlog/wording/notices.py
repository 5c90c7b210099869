"""Sentences that stand on every page or report of their kind, whatever its numbers."""

from __future__ import annotations

DEFER = (
    "Local codes, the authority having jurisdiction, manufacturers' data and licensed practice come before "
    "anything stated here."
)
ESTIMATE = "An estimate; only a flow test measures it."
DRAIN_TEST_LIMIT = (
    "A main drain test compares a system with its own past. It does not measure what the supply can give at the "
    "design demand, and it does not replace a flow test or a forward-flow test."
)
ALARM_TEST_LIMIT = "An inspector's test is a test of the alarm or the valve. It is no evidence of capacity."
VALVE_STATUS_LIMIT = (
    "A valve status test shows that water came after a valve was reopened. It is no evidence of capacity."
)
CLASS_IS_PROPOSED = (
    "A finding is an observed condition. Its class as a deficiency is proposed here and decided by a qualified "
    "person, who signs."
)
DEMAND_AS_RECORDED = (
    "The design demand is as recorded. Hazard, occupancy and piping were not examined, and nothing is said on how "
    "long the supply lasts."
)
TEN_PERCENT_STANDS = (
    "The ten percent criterion is always computed on the readings as entered; reading error is shown beside it "
    "and never lifts a flag."
)
ONLY_LISTED_ITEMS = "Only the items listed were inspected or tested on this visit."
STANDARD_NOT_RECORDED = "Adopted standard not recorded."
NO_DEVICE_SIGNATURE = "Entered by form, without the signature of a tablet."
IMPORTED = "Taken over from earlier records; not witnessed through this log."
INFORMATION_SIGN = "Read from the information sign on site; not witnessed."
UNAPPROVED_RULE = "from memory, approved by nobody: not a requirement of a clause"
TIMES_SAID = "Dates are the days of the tests in the site's zone; times of entries are in UTC."

EVERY_ESTIMATE = (ESTIMATE, DEFER)
EVERY_REPORT = (DEFER, CLASS_IS_PROPOSED, DEMAND_AS_RECORDED, TEN_PERCENT_STANDS, ONLY_LISTED_ITEMS)
_LIMITS = {
    "main_drain_test": DRAIN_TEST_LIMIT,
    "inspectors_test": ALARM_TEST_LIMIT,
    "valve_status_test": VALVE_STATUS_LIMIT,
}


def limit_of_kind(kind: str) -> str:
    """Return what a test of this kind is no evidence of; empty where nothing needs saying."""
    return _LIMITS.get(kind, "")


def origin_notice(via: str, source: str = "") -> str:
    """Return how an entry came in, where that limits what it shows; empty for one signed by a tablet."""
    if source == "information sign":
        return INFORMATION_SIGN
    if via == "import" or source == "old record":
        return IMPORTED
    return NO_DEVICE_SIGNATURE if via == "form" else ""
