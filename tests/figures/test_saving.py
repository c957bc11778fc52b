import re
import xml.etree.ElementTree as ET

import matplotlib as mpl
import matplotlib.pyplot as plt
import pytest
from matplotlib.figure import Figure

from niche.figures import Drawing, coexistence_windows, inline_svg, overlap_matrix, png_bytes, save, svg_text, zone_maps
from niche.figures.drawing import look
from niche.study import Zones


def test_equal_runs_give_equal_bytes(make, zones, tmp_path):
    use = {"dunlin": [[3, 2, 1]] * 4, "redshank": [[1, 2, 3]] * 4}
    for name in ("a", "b"):
        (tmp_path / name).mkdir()
        result = make(use)
        for drawing in (zone_maps(result, zones), overlap_matrix(result), coexistence_windows(result)):
            save(drawing, tmp_path / name)
    first = sorted((tmp_path / "a").iterdir())
    assert [path.suffix for path in first] == [".png", ".svg"] * 3
    for path in first:
        assert path.read_bytes() == (tmp_path / "b" / path.name).read_bytes(), path.name


def test_saving_twice_gives_equal_bytes(analysis, zones):
    drawing = zone_maps(analysis, zones)
    assert svg_text(drawing) == svg_text(drawing)
    assert png_bytes(drawing) == png_bytes(drawing)


def test_files_tell_no_date_and_no_version(analysis, zones):
    drawing = zone_maps(analysis, zones)
    svg, png = svg_text(drawing), png_bytes(drawing)
    assert "dc:date" not in svg
    assert "matplotlib.org" not in svg
    assert mpl.__version__ not in svg
    assert b"Software" not in png
    assert drawing.alt.encode() in png


def test_a_figure_is_shapes_alone(analysis, zones):
    for drawing in (zone_maps(analysis, zones), overlap_matrix(analysis)):
        svg = svg_text(drawing)
        assert "<image" not in svg
        assert "<text" not in svg


def test_nothing_is_left_in_pyplot(analysis, zones):
    zone_maps(analysis, zones)
    overlap_matrix(analysis)
    assert plt.get_fignums() == []


def test_inline_figures_do_not_clash(analysis, zones):
    page = inline_svg(zone_maps(analysis, zones)) + inline_svg(overlap_matrix(analysis))
    ids = re.findall(r'\sid="([^"]+)"', page)
    assert len(ids) == len(set(ids))
    assert {i.split("-")[0] for i in ids} == {"zone_maps", "overlap_matrix_pianka"}
    for target in re.findall(r'href="#([^"]+)"|url\(#([^)]+)\)', page):
        assert "".join(target) in ids
    assert "*{" not in page.replace(" *{", "")


def test_an_inline_figure_is_one_labelled_image(analysis, zones):
    drawing = zone_maps(analysis, zones)
    root = ET.fromstring(inline_svg(drawing))
    assert root.get("role") == "img"
    assert root.get("aria-labelledby") == "zone_maps-title zone_maps-desc"
    title, desc = root[0], root[1]
    assert (title.get("id"), title.text) == ("zone_maps-title", drawing.title)
    assert (desc.get("id"), desc.text) == ("zone_maps-desc", drawing.alt)
    assert "metadata" not in inline_svg(drawing)


@pytest.mark.parametrize("name", ["<b>dunlin</b>", 'a" onload="x', "-->", "]]>", "&amp;", "</svg><script>"])
def test_markup_in_names_stays_text(make, name):
    zones = Zones(rows=(name,), columns=("a", "b"), layout=(("c", "d"),))
    drawing = zone_maps(make({name: [[2, 1]] * 3}, zones), zones)
    root = ET.fromstring(svg_text(drawing))
    inline = ET.fromstring(inline_svg(drawing))
    assert name in inline[1].text
    for tree in (root, inline):
        assert not [e for e in tree.iter() if e.tag.rpartition("}")[2] in ("b", "script")]
        assert not [e for e in tree.iter() if e.get("onload")]


def test_letters_that_no_font_has_are_left_to_the_reader():
    with look():
        figure = Figure()
        figure.text(0.5, 0.5, "dunlin \U0001fbff")
    drawing = Drawing("x", "x", "x", figure)
    assert "dunlin \U0001fbff" in svg_text(drawing)
    assert png_bytes(drawing).startswith(b"\x89PNG")


def test_letters_of_the_own_font_are_shapes():
    with look():
        figure = Figure()
        figure.text(0.5, 0.5, "Бекас αβ≤ é")
    assert "<text" not in svg_text(Drawing("x", "x", "x", figure))
