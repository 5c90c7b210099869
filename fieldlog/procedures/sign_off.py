"""Sign-off: who signed what; the entries are named by their hashes."""

from __future__ import annotations

import re
from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import WORDS, Sha256, Uid
from fieldlog.procedures.fields import Day, Line, ZonedTime
from fieldlog.procedures.procedure import Body, Problem, Procedure

# Read token by token: one expression for the whole path would try all ways to split its spaces.
_TOKEN = re.compile(r"[ ,\t\r\n]*(?:([MLC])|(-?[0-9]{1,5}(?:\.[0-9]{1,4})?)(?=[ ,\t\r\nMLC-]|$))")
_NUMBERS = {"M": 2, "L": 2, "C": 6}  # a segment
LONGEST_STROKES = 16 * 1024


class Covered(Body, frozen=True, kw_only=True):
    """One entry as it was signed."""

    uid: Annotated[Uid, Meta(title="Entry")]
    sha256: Annotated[Sha256, Meta(title="SHA-256")]


class Signer(Body, frozen=True, kw_only=True):
    """A person who signed, by drawing or, where that was impossible, by typing with the reason."""

    role: Annotated[Literal["technician", "owner's representative", "witness"], Meta(title="Signs as")]
    name: Annotated[Line, Meta(title="Name")]
    person: Annotated[Uid, Meta(title="Person")] | None = None
    licence: Annotated[Line, Meta(title="Licence")] | None = None
    strokes: Annotated[str, Meta(title="Drawn signature", min_length=1, max_length=LONGEST_STROKES)] | None = None
    typed: Annotated[Line, Meta(title="Typed name")] | None = None
    typed_reason: Annotated[Line, Meta(title="Why typed")] | None = None


class SignOff(Body, frozen=True, kw_only=True):
    """What was signed, by whom, and the summary that was shown."""

    covers: Annotated[tuple[Covered, ...], Meta(title="Covers", min_length=1, max_length=500)]
    signers: Annotated[tuple[Signer, ...], Meta(title="Signers", min_length=1, max_length=6)]
    summary: Annotated[str, Meta(title="Summary shown", min_length=1, max_length=20000, pattern=WORDS)]
    signed_on: Annotated[Day, Meta(title="Signed on")]
    signed_at: Annotated[ZonedTime, Meta(title="Signed at")] | None = None


def _problems(body: SignOff) -> list[Problem]:
    found = []
    for index, signer in enumerate(body.signers):
        where = f"signers[{index}]"
        if (signer.strokes is None) == (signer.typed is None):
            found.append(Problem(f"{where}.strokes", "give either a drawn signature or a typed name with the reason"))
        if signer.typed is not None and signer.typed_reason is None:
            found.append(Problem(f"{where}.typed_reason", "say why the name is typed and not drawn"))
        if signer.strokes is not None and not _is_path(signer.strokes):
            found.append(Problem(f"{where}.strokes", _PATH_WANTED))
    if len({one.uid for one in body.covers}) != len(body.covers):
        found.append(Problem("covers", "an entry is named twice; name each once"))
    return found


_PATH_WANTED = (
    "a drawn signature is path text that begins with M and holds only M and L with pairs of numbers and C with six, "
    "each number of at most five digits and four decimals; draw it again"
)


def _is_path(text: str) -> bool:
    """Return whether the text is a path of whole segments: M first, then M, L and C, each with all its numbers."""
    text, place = text.rstrip(" ,\t\r\n"), 0
    needed, count = 0, 0
    while place < len(text):
        token = _TOKEN.match(text, place)
        if token is None:
            return False
        place = token.end()
        if token[2] is not None:
            count += 1
        elif (needed == 0 and token[1] != "M") or (needed and (count == 0 or count % needed)):
            return False
        else:
            needed, count = _NUMBERS[token[1]], 0
    return needed > 0 and count > 0 and count % needed == 0


PROCEDURE = Procedure(
    "sign_off", "Sign-off", SignOff, frozenset({"technician", "office"}), frozenset({"site", "visit"}),
    check=_problems,
)  # fmt: skip
