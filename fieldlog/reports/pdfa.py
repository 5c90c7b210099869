"""The archival form of a report: PDF/A-3b with its records inside (ISO 19005-3), made from the drawn pages.

Nothing may save the file again once it is sealed, so this comes before the seal. Equal input gives equal bytes.
"""

from __future__ import annotations

import hashlib
import re
from dataclasses import dataclass
from datetime import UTC, datetime
from functools import cache
from io import BytesIO
from xml.sax.saxutils import escape

import pikepdf
from pikepdf import Array, Dictionary, Name, Pdf, Stream, String

from fieldlog.reports.colour_profile import srgb_profile

RECORDS_NAME = "records.json"

# What XML 1.0 can't hold at all (W3C, XML 1.0, 2.2 "Characters").
_NOT_XML = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")

_XMP = """<?xpacket begin="\ufeff" id="W5M0MpCehiHzreSzNTczkc9d"?>
<x:xmpmeta xmlns:x="adobe:ns:meta/">
<rdf:RDF xmlns:rdf="http://www.w3.org/1999/02/22-rdf-syntax-ns#">
<rdf:Description rdf:about="" xmlns:dc="http://purl.org/dc/elements/1.1/" xmlns:xmp="http://ns.adobe.com/xap/1.0/"
 xmlns:pdf="http://ns.adobe.com/pdf/1.3/" xmlns:pdfaid="http://www.aiim.org/pdfa/ns/id/">
<dc:format>application/pdf</dc:format>
<dc:title><rdf:Alt><rdf:li xml:lang="x-default">{title}</rdf:li></rdf:Alt></dc:title>
<dc:creator><rdf:Seq><rdf:li>{author}</rdf:li></rdf:Seq></dc:creator>
<xmp:CreateDate>{made_at}</xmp:CreateDate>
<xmp:ModifyDate>{made_at}</xmp:ModifyDate>
<xmp:CreatorTool>fieldlog</xmp:CreatorTool>
<pdf:Producer>fieldlog</pdf:Producer>
<pdfaid:part>{part}</pdfaid:part>
<pdfaid:conformance>B</pdfaid:conformance>
</rdf:Description>
</rdf:RDF>
</x:xmpmeta>
<?xpacket end="w"?>"""


@dataclass(frozen=True, slots=True)
class DocumentFacts:
    """What the file says of itself: title, author (the organisation) and when its content was settled."""

    title: str
    author: str
    made_at: datetime


def archival_pdf(pages: bytes, facts: DocumentFacts, records_json: bytes, *, part: int = 3) -> bytes:
    """Return the drawn `pages` as PDF/A-3b with `records_json` attached.

    `part` 1 gives the same pages as PDF/A-1b without the attachment: the older part is the one that programs of
    others can check in full.
    """
    with pikepdf.open(BytesIO(pages)) as pdf:
        _describe(pdf, facts, part)
        if part > 1:
            _attach_records(pdf, facts, records_json)
        return _saved(pdf, part)


def _describe(pdf: Pdf, facts: DocumentFacts, part: int) -> None:
    words = {"title": _xml(facts.title), "author": _xml(facts.author), "made_at": _iso(facts.made_at)}
    metadata = Stream(pdf, _XMP.format(**words, part=part).encode())
    metadata.Type, metadata.Subtype = Name.Metadata, Name.XML
    pdf.Root.Metadata = metadata
    profile = Stream(pdf, _profile())
    profile.N = 3
    pdf.Root.OutputIntents = Array(
        [
            Dictionary(
                Type=Name.OutputIntent,
                S=Name.GTS_PDFA1,
                OutputConditionIdentifier=String("sRGB"),
                Info=String("sRGB of IEC 61966-2-1"),
                DestOutputProfile=pdf.make_indirect(profile),
            )
        ]
    )
    # The XMP says all; a second copy could only disagree with it.
    if "/Info" in pdf.trailer:
        del pdf.trailer["/Info"]


@cache
def _profile() -> bytes:
    return srgb_profile()


def _attach_records(pdf: Pdf, facts: DocumentFacts, records_json: bytes) -> None:
    content = Stream(pdf, records_json)
    content.Type, content.Subtype = Name.EmbeddedFile, Name("/application/json")
    content.Params = Dictionary(
        Size=len(records_json),
        ModDate=String(facts.made_at.astimezone(UTC).strftime("D:%Y%m%d%H%M%SZ")),
        CheckSum=String(hashlib.md5(records_json, usedforsecurity=False).digest()),
    )
    kept = pdf.make_indirect(content)
    entry = pdf.make_indirect(
        Dictionary(
            Type=Name.Filespec,
            F=String(RECORDS_NAME),
            UF=String(RECORDS_NAME),
            Desc=String("Every entry of this report as it stands in the log"),
            AFRelationship=Name.Data,
            EF=Dictionary(F=kept, UF=kept),
        )
    )
    pdf.Root.Names = Dictionary(EmbeddedFiles=Dictionary(Names=Array([String(RECORDS_NAME), entry])))
    pdf.Root.AF = Array([entry])


def _saved(pdf: Pdf, part: int) -> bytes:
    output = BytesIO()
    if part > 1:
        modes = {"min_version": "1.7", "object_stream_mode": pikepdf.ObjectStreamMode.generate}
    else:
        modes = {"force_version": "1.4", "object_stream_mode": pikepdf.ObjectStreamMode.disable}
    pdf.save(output, deterministic_id=True, **modes)
    return output.getvalue()


def _iso(at: datetime) -> str:
    return at.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")


def _xml(text: str) -> str:
    return escape(_NOT_XML.sub("\ufffd", text))
