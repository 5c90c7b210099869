"""A whole statement in lines, as the command line prints it."""

from __future__ import annotations

from dataclasses import replace

from hypothesis import given

from fieldlog.assessment.codes import CannotShow, CheckCode, NextCode, ReasonCode
from fieldlog.records.statement import BlindLoss, Reason, Statement, SystemStatement
from fieldlog.wording.notices import DEFER
from fieldlog.wording.paragraphs import of_statement
from fieldlog.wording.statements import system_sentences
from tests.wording.forbidden import forbidden_in, is_plain
from tests.wording.test_statements import ACCEPTANCE, BAR, PREVIOUS, PSI, SAID, statements

FULL = replace(
    SAID,
    statement=Statement.CHANGED,
    reasons=(
        Reason(
            ReasonCode.TEN_PERCENT,
            {"against": "acceptance", "reduction": 0.1555, "residual_psi": 55.0, "reference_psi": 65.0},
            (8127, 12),
        ),
        Reason(ReasonCode.STATIC_BEFORE_ONLY, {}, (8127,)),
    ),
    findings=(Reason(ReasonCode.ALARM_LATE, {"which": "bell", "seconds": 96, "limit_s": 90}, (8129,)),),
    ten_percent=(replace(ACCEPTANCE, sigma=0.02), PREVIOUS),
    blind_loss=BlindLoss(8.3, 6.1, 620.0, 4),
    next=(NextCode.FIND_CAUSE, NextCode.SECOND_GAUGE),
    checks=(CheckCode.CONTROL_VALVES, CheckCode.STRAINER),
    cannot_show=(CannotShow.CAPACITY,),
    misread=(7001, 7003),
)


def test_the_short_form_is_statement_blind_loss_and_standing() -> None:
    first, blind, standing = of_statement(FULL, PSI)
    assert first.startswith("Changed. Residual is 15.6 % below acceptance")
    assert blind.startswith("A loss of up to 9 psi")
    assert standing.startswith("Judged as of 12 October 2026")


def test_the_long_form_holds_all_that_the_statement_rests_on() -> None:
    said = "\n".join(of_statement(FULL, BAR, with_reasons=True))
    for part in (
        "recorded design demand is 2347 L/min", "percentage points", "static before only, with more error "
        "counted. (#8127)",
        "local bell came after 96 s; the rule profile allows 90 s. (#8129)", "Looks misread, and is kept: "
        "#7001, #7003.",
        "Then: read a second gauge", "The strainer", "measures no flow", DEFER,
    ):  # fmt: skip
        assert part in said
    assert said.count("15.6 %") == 2  # in the first paragraph and in the comparison


def test_a_flag_is_not_said_twice_among_the_reasons() -> None:
    said = system_sentences(FULL, PSI)
    assert sum("ten percent criterion asks" in sentence for sentence in said) == 1


@given(statements)
def test_every_line_of_any_statement_is_plain_and_says_nothing_forbidden(said: SystemStatement) -> None:
    for line in of_statement(said, BAR, with_reasons=True):
        assert is_plain(line), line
        assert not forbidden_in(line), line
