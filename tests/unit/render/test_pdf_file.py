"""The PDF sheet, read back with another library and in other processes."""

import hashlib
import io
import re
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pikepdf
import pytest

from derive.errors import OutputError
from derive.render import pdf as pdf_module
from derive.render.groups import groups
from derive.render.pdf import to_pdf
from derive.sheet.document import Display, Paragraph
from tests.support.issued_pages import elements, faults_of_document

CONFTEST = Path(__file__).with_name("conftest.py")
PRINT_TWICE = """
import hashlib, importlib.util, sys
spec = importlib.util.spec_from_file_location("example", sys.argv[1])
example = importlib.util.module_from_spec(spec)
spec.loader.exec_module(example)
from derive.render.html import to_html
from derive.render.pdf import to_pdf
sheet = example.example_sheet()
sys.stdout.write(hashlib.sha256(to_pdf(sheet) + to_html(sheet)).hexdigest())
"""


@pytest.fixture(scope="module")
def made(sheet):
    return to_pdf(sheet)


@pytest.fixture
def opened(made):
    with pikepdf.open(io.BytesIO(made)) as document:
        yield document


def text_of(document):
    """Join the words of the hidden and the shown text, read by the fonts' own character maps."""
    return "".join(page_text(page) for page in document.pages)


def page_text(page):
    fonts = {name: character_map(font) for name, font in page.Resources.Font.items()}
    current, out = {}, []
    for operands, operator in pikepdf.parse_content_stream(page):
        if str(operator) == "Tf":
            current = fonts[str(operands[0])]
        elif str(operator) in ("Tj", "TJ"):
            chunks = operands[0] if str(operator) == "TJ" else [operands[0]]
            for chunk in chunks:
                if isinstance(chunk, pikepdf.String):
                    out.append(decoded(bytes(chunk), current))
            out.append(" ")
    return "".join(out)


def character_map(font):
    width = 2 if font.Subtype == "/Type0" else 1
    text = font.ToUnicode.read_bytes().decode("ascii")
    pairs = re.findall(r"<([0-9a-fA-F]+)>\s*<([0-9a-fA-F]+)>", text.split("endcodespacerange")[1])
    return {"width": width, **{int(a, 16): bytes.fromhex(b).decode("utf-16-be") for a, b in pairs}}


def decoded(data, mapping):
    width = mapping["width"]
    codes = (int.from_bytes(data[i : i + width], "big") for i in range(0, len(data), width))
    return "".join(mapping.get(code, "") for code in codes)


def test_the_pages_are_a4_and_numbered(opened):
    assert len(opened.pages) == 5
    for number, page in enumerate(opened.pages, start=1):
        assert f"page {number} of 5" in page_text(page)
        width, height = (float(v) / 72 * 25.4 for v in page.MediaBox[2:])
        assert (round(width), round(height)) == (210, 297)


def test_all_fonts_are_embedded_and_are_ours(opened):
    names = set()
    for page in opened.pages:
        for font in page.Resources.Font.values():
            if font.Subtype == "/Type3":
                continue  # the hidden text: its glyphs are empty
            descriptor = font.DescendantFonts[0].FontDescriptor
            assert "/FontFile2" in descriptor or "/FontFile3" in descriptor
            names.add(str(font.BaseFont).split("+")[1].removesuffix("-Bold"))
    assert names == {"STIX-Two-Text", "STIX-Two-Math", "JetBrains-Mono"}


def test_topology_and_ledger_are_attached_with_their_relationships(opened, sheet):
    files = {str(f.UF): f for f in opened.Root.AF}
    assert len(opened.Root.AF) == len(files) == 2
    topology, ledger = files[sheet.topology_name], files[sheet.ledger_name]
    assert (topology.AFRelationship, ledger.AFRelationship) == ("/Source", "/Data")
    assert topology.EF.F.read_bytes().decode() == sheet.topology_text
    assert ledger.EF.F.read_bytes().decode() == sheet.ledger_text
    assert topology.EF.F.Subtype == "/application/toml"
    assert set(opened.attachments) == set(files)


def test_the_file_declares_what_an_archive_asks_for(opened):
    with opened.open_metadata() as metadata:
        assert metadata.pdfa_status == "3A"
    assert opened.Root.MarkInfo.Marked
    assert opened.Root.Lang == "en"


def test_every_section_has_a_bookmark(opened, sheet):
    with opened.open_outline() as outline:
        titles = [item.title for item in outline.root]
        inner = [child.title for item in outline.root for child in item.children]
    assert [t.split(" ", 1)[1].strip() for t in titles] == [
        s.title for s in sheet.sections if s.level == 1
    ]
    assert [t.split(" ", 1)[1].strip() for t in inner] == ["Steps"]


def test_formulas_can_be_searched(opened):
    text = text_of(opened)
    assert "v_b − V_src" in text
    assert "R_1·g_m·C_60" in text


def test_hidden_text_has_no_ink(opened):
    font = next(f for f in opened.pages[0].Resources.Font.values() if f.Subtype == "/Type3")
    for procedure in font.CharProcs.values():
        assert re.fullmatch(rb"\d+ 0 0 0 0 0 d1", procedure.read_bytes().strip())


def test_words_of_any_language_are_in_the_text(opened):
    text = text_of(opened)
    assert "größer" in text
    assert "<script>alert(1)</script>" in text


def test_a_failed_sheet_says_so_on_its_first_page(opened, sheet):
    # A sign from another font ends a run of text, so spaces count for nothing here.
    first = "".join(page_text(opened.pages[0]).split())
    assert "2checksfailed" in first
    assert all("".join(failure.split()) in first for failure in sheet.failures)


def test_a_long_table_repeats_its_heading_on_the_next_page(opened):
    texts = [page_text(page) for page in opened.pages]
    assert "Residual" in texts[2]
    assert "Residual" in texts[3]


def test_no_heading_stands_alone_at_the_foot_of_a_page(sheet):
    """Push a section down line by line: heading, first words and formula turn the page together."""
    section = next(s for s in sheet.sections if s.title == "Result")
    filler = sheet.sections[0].blocks[1]
    found = set()
    for lines in (8, 15, 18, 21):
        first = replace(sheet.sections[0], blocks=(filler,) * lines)
        with pikepdf.open(io.BytesIO(to_pdf(replace(sheet, sections=(first, section))))) as document:
            texts = [page_text(page) for page in document.pages]
        # The heads of the pages that follow name the section too.
        place = min(i for i, text in enumerate(texts) if re.search(r"2 +Result", text))
        assert "the response of the follower" in texts[place]
        assert "V_e/V_src" in texts[place]
        found.add(place)
    assert found == {0, 1}


def test_an_issued_file_has_no_fault(opened):
    assert faults_of_document(opened) == []


def test_each_fault_of_a_file_is_found(made):
    with pikepdf.open(io.BytesIO(made)) as document:
        figure = next(e for e in elements(document.Root.StructTreeRoot) if e.get("/S") == "/Formula")
        del figure.Alt
        with document.open_metadata() as metadata:
            metadata["pdfuaid:part"] = "2"
        heading = [e for e in elements(document.Root.StructTreeRoot) if e.get("/S") == "/H2"][-1]
        for inner in elements(heading):
            inner.Pg = document.pages[0].obj
        found = faults_of_document(document)
    assert "/Formula without alternative text" in found
    assert any("declares" in fault for fault in found)
    assert "page 1: a heading has nothing under it" in found


def test_a_section_whose_words_come_in_two_pieces_keeps_them_with_its_heading(sheet):
    words = next(b for s in sheet.sections for b in s.blocks if isinstance(b, Paragraph))
    formula = next(b for s in sheet.sections for b in s.blocks if isinstance(b, Display))
    section = replace(sheet.sections[0], blocks=(words, words, formula, words))
    (group,) = groups((section,))
    assert group.kept == (words, words, formula)


def test_two_processes_write_the_same_bytes():
    digests = {
        subprocess.run(
            [sys.executable, "-c", PRINT_TWICE, str(CONFTEST)],
            capture_output=True,
            text=True,
            check=True,
            env={"PYTHONHASHSEED": seed, "PATH": ""},
            cwd=CONFTEST.parents[3],
        ).stdout
        for seed in ("1", "2")
    }
    assert len(digests) == 1
    assert re.fullmatch("[0-9a-f]{64}", digests.pop())


def test_another_topology_gives_another_file(made, sheet):
    other = to_pdf(replace(sheet, topology_text=sheet.topology_text + "# changed\n"))
    assert hashlib.sha256(other).digest() != hashlib.sha256(made).digest()


def test_a_missing_library_is_named_with_its_cure(sheet, monkeypatch):
    import builtins

    real = builtins.__import__

    def broken(name, *rest, **more):
        if name == "weasyprint":
            raise OSError("cannot load library 'libpango-1.0-0'")
        return real(name, *rest, **more)

    monkeypatch.setattr(builtins, "__import__", broken)
    with pytest.raises(OutputError, match=r"libpango-1\.0-0 libpangoft2-1\.0-0"):
        pdf_module.to_pdf(sheet)
