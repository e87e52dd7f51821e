"""What an archive asks of the PDF, read back with another library."""

import io
import re

import pikepdf
import pytest

from derive.render import archive
from derive.render.pdf import to_pdf


@pytest.fixture(scope="module")
def made(sheet):
    return to_pdf(sheet)


@pytest.fixture
def opened(made):
    with pikepdf.open(io.BytesIO(made)) as document:
        yield document


def elements(document):
    """Give every element of the tree of tags, from its root."""
    waiting, found = [document.Root.StructTreeRoot], []
    while waiting:
        element = waiting.pop()
        if isinstance(element, pikepdf.Array):
            waiting += list(element)
        elif isinstance(element, pikepdf.Dictionary):
            found.append(element)
            if "/K" in element:
                waiting.append(element.K)
    return found


def test_both_standards_are_declared_once_in_one_element(opened):
    with opened.open_metadata() as metadata:
        assert metadata.pdfa_status == "3A"
        assert metadata["pdfuaid:part"] == "1"
    text = opened.Root.Metadata.read_bytes().decode()
    assert text.count("<rdf:RDF") == 1
    # A namespace that PDF/A does not know has its description.
    assert "<pdfaSchema:prefix>pdfuaid</pdfaSchema:prefix>" in text
    assert "/Filter" not in opened.Root.Metadata


def test_every_formula_and_figure_has_words(opened, sheet):
    tagged = [e for e in elements(opened) if e.get("/S") in ("/Formula", "/Figure")]
    assert len(tagged) > 40
    assert all(str(e.Alt).strip() for e in tagged)
    spoken = {str(e.Alt) for e in tagged if e.S == "/Formula"}
    assert any(words.startswith("V sub e over V sub src") for words in spoken) or any(
        "over" in words for words in spoken
    )


def test_boxes_of_formulas_lie_on_their_page(opened):
    for element in elements(opened):
        if element.get("/S") == "/Formula":
            left, low, right, high = (float(v) for v in element.A.BBox)
            width, height = (float(v) for v in element.Pg.MediaBox[2:])
            assert 0 <= left < right <= width
            assert 0 <= low < high <= height


def test_running_headers_are_no_part_of_the_text_that_is_read_out(opened):
    for place, page in enumerate(opened.pages):
        artifacts, marks = 0, []
        for operands, operator in pikepdf.parse_content_stream(page):
            if str(operator) == "BMC" and str(operands[0]) == "/Artifact":
                artifacts += 1
            elif str(operator) == "BDC":
                marks.append(int(operands[1].MCID))
        parents = opened.Root.StructTreeRoot.ParentTree.Nums[2 * place + 1]
        reached = {e.objgen for e in elements(opened) if e.is_indirect}
        assert artifacts > 0
        assert all(parents[mark].objgen in reached for mark in marks)
        empty = {k for k, parent in enumerate(parents) if not isinstance(parent, pikepdf.Dictionary)}
        assert empty
        assert not empty & set(marks)


def test_links_have_words(opened):
    links = [a for page in opened.pages for a in page.get("/Annots", ()) if a.Subtype == "/Link"]
    assert links
    assert all(str(link.Contents) for link in links)
    assert all(page.Tabs == "/S" for page in opened.pages if "/Annots" in page)


def test_the_file_says_who_made_it_and_what_it_is(opened):
    assert opened.docinfo["/Author"] == "J. Example"
    assert "RG-310-04, revision B" in str(opened.docinfo["/Subject"])


def test_contents_name_the_pages_on_which_sections_begin(opened):
    with opened.open_outline() as outline:
        titles = [item.title for item in outline.root]
    assert len(titles) == 7


def test_without_the_finish_nothing_is_declared(sheet, monkeypatch):
    monkeypatch.setattr(archive, "_SCHEMA", "")
    with pikepdf.open(io.BytesIO(to_pdf(sheet))) as document:
        assert not re.search("pdfuaid", document.Root.Metadata.read_bytes().decode())
