"""What an archive asks of a PDF beyond what its writer does: a second declaration, tags, words, artifacts.

PDF/A-3a (ISO 19005-3) is written by the writer of the PDF; PDF/UA-1 (ISO 14289-1) is declared and made true here:
formulas are tagged as such, links have words, running headers are artifacts, boxes of figures are in the page's own
coordinates. Clauses are from memory.
"""

from __future__ import annotations

from collections.abc import Collection, Iterator
from typing import Any

import pydyf

POINTS_A_PIXEL = 0.75
# The namespace of PDF/UA is not among those that PDF/A knows: it has to be described (ISO 19005-3, 6.6.2.3).
_SCHEMA = """\
<rdf:Description rdf:about="" xmlns:pdfuaid="http://www.aiim.org/pdfua/ns/id/" pdfuaid:part="1"/>\
<rdf:Description rdf:about="" xmlns:pdfaExtension="http://www.aiim.org/pdfa/ns/extension/" \
xmlns:pdfaSchema="http://www.aiim.org/pdfa/ns/schema#" \
xmlns:pdfaProperty="http://www.aiim.org/pdfa/ns/property#">\
<pdfaExtension:schemas><rdf:Bag><rdf:li rdf:parseType="Resource">\
<pdfaSchema:schema>PDF/UA identification schema</pdfaSchema:schema>\
<pdfaSchema:namespaceURI>http://www.aiim.org/pdfua/ns/id/</pdfaSchema:namespaceURI>\
<pdfaSchema:prefix>pdfuaid</pdfaSchema:prefix>\
<pdfaSchema:property><rdf:Seq><rdf:li rdf:parseType="Resource">\
<pdfaProperty:name>part</pdfaProperty:name>\
<pdfaProperty:valueType>Integer</pdfaProperty:valueType>\
<pdfaProperty:category>internal</pdfaProperty:category>\
<pdfaProperty:description>Part of ISO 14289 that the file follows</pdfaProperty:description>\
</rdf:li></rdf:Seq></pdfaSchema:property>\
</rdf:li></rdf:Bag></pdfaExtension:schemas></rdf:Description>"""


def finish(pdf: Any, formula_words: Collection[str]) -> None:
    """Make a tagged PDF/A-3a fit for PDF/UA-1 as well, and say so in its metadata.

    Given: the alternative texts of its formulas, by which they are told from its figures.
    """
    objects = {made.reference: made for made in pdf.objects if made.number is not None}
    _declare(pdf, objects)
    _attach_once(pdf)
    pages = [made for made in pdf.objects if isinstance(made, dict) and made.get("Type") == "/Page"]
    for element in _elements(pdf):
        if element["S"] == "/Figure":
            _place(element, objects)
            if _words(element) in formula_words:
                element["S"] = "/Formula"
    for made in pdf.objects:
        if isinstance(made, dict) and made.get("Subtype") == "/Link" and "Contents" not in made:
            made["Contents"] = pydyf.String("to the place in this document")
    _headers_apart(pdf, objects, pages)


def _elements(pdf: Any) -> Iterator[Any]:
    return (m for m in pdf.objects if isinstance(m, dict) and m.get("Type") == "/StructElem")


def _words(element: Any) -> str:
    found = element.get("Alt")
    return str(found.string) if found is not None else ""


def _declare(pdf: Any, objects: dict[bytes, Any]) -> None:
    """Add the second declaration to the metadata, within their one RDF element, and keep them readable."""
    metadata = objects[pdf.catalog["Metadata"]]
    text = b"\n".join(metadata.stream)
    metadata.stream = [text.replace(b"</rdf:RDF>", _SCHEMA.encode() + b"</rdf:RDF>")]
    metadata.compress = False


def _attach_once(pdf: Any) -> None:
    """List each attached file once: the writer does so twice."""
    if "AF" in pdf.catalog:
        pdf.catalog["AF"][:] = list(dict.fromkeys(pdf.catalog["AF"]))


def _place(element: Any, objects: dict[bytes, Any]) -> None:
    """Turn a figure's box from pixels downwards to points upwards."""
    left, top, right, bottom = (float(value) * POINTS_A_PIXEL for value in element["A"]["BBox"])
    height = float(objects[element["Pg"]]["MediaBox"][3])
    box = (left, height - bottom, right, height - top)
    element["A"]["BBox"] = pydyf.Array([round(value, 2) for value in box])


def _headers_apart(pdf: Any, objects: dict[bytes, Any], pages: list[Any]) -> None:
    """Mark as artifacts what stands outside the tree of tags: running headers and page numbers."""
    root = objects[pdf.catalog["StructTreeRoot"]]
    numbers = objects[root["ParentTree"]]["Nums"]
    document = objects[root["K"][0]]
    top = set(document["K"])
    for place, page in enumerate(pages):
        marks = numbers[2 * place + 1]
        outside = {
            mark
            for mark, reference in enumerate(marks)
            if _uppermost(objects, objects[reference], document.reference) not in top
        }
        _unmark(objects[page["Contents"]].stream, outside)
        for mark in outside:
            marks[mark] = "null"


def _uppermost(objects: dict[bytes, Any], element: Any, document: bytes) -> bytes:
    """Give the element next below the document that an element stands in."""
    while element["P"] != document:
        element = objects[element["P"]]
    reference: bytes = element.reference
    return reference


def _unmark(stream: list[Any], outside: set[int]) -> None:
    """Turn marked content into artifacts; three items of a stream begin it: tag, properties, operator."""
    for place in range(len(stream) - 1):
        properties = stream[place]
        if isinstance(properties, dict) and properties.get("MCID") in outside:
            stream[place - 1], stream[place], stream[place + 1] = "/Artifact", b"BMC", b""
