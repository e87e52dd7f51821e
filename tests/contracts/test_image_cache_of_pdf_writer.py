"""WeasyPrint's cache takes our own images: an undocumented protocol that formulas lean on."""

import io

import pikepdf
import pydyf
import weasyprint


class Square:
    """A black square of one em, whose form is shared by every use."""

    def __init__(self):
        self.id = "square"
        self.asked = []

    def get_intrinsic_size(self, resolution, font_size):
        self.asked.append(font_size)
        return font_size, font_size, 1.0

    def draw(self, stream, width, height, style):
        name = stream.add_image(self, False, 1)
        with stream.stacked():
            stream.transform(a=width, d=height)
            stream.stream.append(f"/{name} Do".encode())

    def get_x_object(self, interpolate, dpi_ratio):
        extra = {"Type": "/XObject", "Subtype": "/Form", "BBox": pydyf.Array([0, 0, 1, 1])}
        return pydyf.Stream([b"0 0 1 1 re f"], pydyf.Dictionary(extra))


def written(html):
    square = Square()
    cache = {"eq:0": square}
    document = weasyprint.HTML(string=html).render(cache=cache)
    return square, document.write_pdf(cache=cache)


def test_an_object_in_the_cache_is_asked_its_size_and_draws_itself():
    square, data = written('<p style="font-size: 20px"><img src="eq:0" alt="square"></p>')
    assert 20 in square.asked
    with pikepdf.open(io.BytesIO(data)) as document:
        forms = [x for x in document.pages[0].Resources.XObject.values()]
        assert [str(form.Subtype) for form in forms] == ["/Form"]
        assert forms[0].read_bytes().strip() == b"0 0 1 1 re f"


def test_a_form_used_twice_is_written_once():
    _, data = written('<img src="eq:0" alt="one"><img src="eq:0" alt="two">')
    with pikepdf.open(io.BytesIO(data)) as document:
        drawn = [op for op in pikepdf.parse_content_stream(document.pages[0]) if str(op.operator) == "Do"]
        assert len(document.pages[0].Resources.XObject) == 1
        assert len(drawn) == 2


def test_an_address_that_is_not_in_the_cache_is_not_drawn():
    square, _ = written('<img src="eq:1" alt="missing">')
    assert square.asked == []
