"""What no sentence of fieldlog may say, whatever the numbers."""

from __future__ import annotations

import re

_WORDS = re.compile(
    r"\b(pass(es|ed|ing)?|fail(s|ed|ing|ure)?|safe(ly|ty)?|unsafe|adequa\w*|inadequa\w*|complian\w*|compl(y|ies))\b",
    re.IGNORECASE,
)
_CLAIMS = (
    re.compile(r"public supply (is|was|stays) (un)?changed", re.IGNORECASE),
    re.compile(r"\bvalves? (is|are|stands?) (open|shut|closed)", re.IGNORECASE),
    re.compile(r"\b(lasts?|suffices?|enough) for\b", re.IGNORECASE),
    re.compile(r"demand (fits|suits|covers|is right for)", re.IGNORECASE),
    re.compile(r"\bis an? (critical|noncritical)? ?(deficiency|impairment)\b", re.IGNORECASE),
)


def forbidden_in(sentence: str) -> list[str]:
    """Return every forbidden word or claim that the sentence holds."""
    claims = [claim.search(sentence) for claim in _CLAIMS]
    return [found.group() for found in (_WORDS.search(sentence), *claims) if found]


def is_plain(sentence: str) -> bool:
    """Return whether the sentence reads as one: capital, end, no leftovers of a program."""
    leftovers = ("{", "}", "None", "nan", "_", "  ", "..", " ,", " .")
    return sentence[0].isupper() and sentence[-1] in ".?)" and not any(left in sentence for left in leftovers)
