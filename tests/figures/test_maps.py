import numpy as np
import pytest
from matplotlib.colors import to_hex
from matplotlib.patches import Rectangle

from niche.figures import zone_maps
from niche.figures.drawing import contrast
from niche.figures.maps import grid_of, panel_title
from niche.study import Zones


def panels(drawing, number):
    return drawing.figure.axes[:number]


def test_the_grid_lies_as_the_zones_lie(zones):
    grid = grid_of(np.array([1.0, 2.0, 3.0]), ("lower sand", "upper sand", "upper mud"), zones)
    np.testing.assert_array_equal(grid, [[2.0, 3.0], [1.0, np.nan]])


def test_cells_carry_percentages_in_their_places(analysis, zones):
    drawing = zone_maps(analysis, zones)
    first = panels(drawing, 3)[0]
    found = {t.get_position(): t.get_text() for t in first.texts}
    # 235, 115 and 50 of 400.
    assert found == {(0.5, 0.5): "59%", (1.5, 0.5): "29%", (0.5, 1.5): "12%"}
    assert [t.get_text() for t in first.get_yticklabels()] == ["upper", "lower"]
    assert [t.get_text() for t in first.get_xticklabels()] == ["sand", "mud"]
    assert first.yaxis_inverted()


def test_one_scale_from_none_to_all_for_every_species(analysis, zones):
    drawing = zone_maps(analysis, zones)
    limits = [axes.collections[0].get_clim() for axes in panels(drawing, 3)]
    assert limits == [(0, 1)] * 3
    values = [axes.collections[0].get_array().compressed() for axes in panels(drawing, 3)]
    np.testing.assert_allclose([sorted(v) for v in values], np.sort(analysis.use.proportion.value, axis=1))


def outlines(axes):
    return {
        (np.floor(p.get_x()), np.floor(p.get_y())): to_hex(p.get_edgecolor())
        for p in axes.patches
        if isinstance(p, Rectangle) and not p.get_fill()
    }, [p.get_linewidth() for p in axes.patches if isinstance(p, Rectangle) and not p.get_fill()]


def test_core_zones_are_outlined_dark_within_white(analysis, zones):
    drawing = zone_maps(analysis, zones)
    for s, axes in enumerate(panels(drawing, 3)):
        grid = grid_of(analysis.use.core[s].astype(float), analysis.usage.zones, zones)
        cells, widths = outlines(axes)
        assert set(cells) == {(x, y) for y, x in np.argwhere(grid == 1)}
        assert widths == [5.0, 2.4] * len(cells)


def test_a_place_without_a_zone_is_hatched_and_told(analysis, zones, texts):
    drawing = zone_maps(analysis, zones)
    hatched = [p for p in panels(drawing, 3)[1].patches if p.get_hatch()]
    assert [(p.get_x(), p.get_y()) for p in hatched] == [(1, 1)]
    legend = [t.get_text() for t in drawing.figure.legends[0].get_texts()]
    assert legend == ["core zone", "no such zone"]
    full = Zones(rows=("upper",), columns=("sand", "mud", "rock"), layout=(("upper sand", "upper mud", "lower sand"),))
    assert [t.get_text() for t in zone_maps(analysis, full).figure.legends[0].get_texts()] == ["core zone"]


def test_titles_tell_what_the_core_holds(analysis, zones):
    # Dunlin: upper sand alone holds 235 of 400.
    assert panel_title(analysis, 0) == "core: 59% in 1 zone, 4 animals"
    title = panels(zone_maps(analysis, zones), 3)[0].get_title()
    assert title.splitlines()[0] == "dunlin"
    assert " ".join(title.split()) == "dunlin core: 59% in 1 zone, 4 animals"


def test_a_species_never_seen_has_a_blank_map(unseen, zones):
    drawing = zone_maps(unseen, zones)
    first = panels(drawing, 3)[0]
    assert {t.get_text() for t in first.texts} == {"–"}
    assert "no use recorded" in first.get_title()
    assert "dunlin: no use recorded, no animals." in drawing.alt
    assert "nan" not in drawing.alt


def test_cells_name_their_zone_where_headings_do_not(make, texts):
    zones = Zones(rows=("1",), columns=("A", "B"), layout=(("creek", "ridge"),))
    drawing = zone_maps(make({"dunlin": [[3, 1]] * 3}, zones), zones)
    assert {t.get_text() for t in drawing.figure.axes[0].texts} == {"creek\n75%", "ridge\n25%"}


def test_text_stands_out_in_every_cell(make):
    shares = np.linspace(0, 1, 9)[1:]
    names = [f"z{i}" for i in range(9)]
    zones = Zones(rows=("r",), columns=tuple(names), layout=(tuple(names),))
    for share in shares:
        use = [[share, *[(1 - share) / 8] * 8]] * 3
        axes = zone_maps(make({"dunlin": use}, zones), zones).figure.axes[0]
        mesh = axes.collections[0]
        colours = mesh.cmap(mesh.norm(mesh.get_array().ravel()))
        for text, colour in zip(axes.texts, colours, strict=True):
            assert contrast(text.get_color(), tuple(colour)) >= 4.5


def test_the_alternative_text_states_the_finding(analysis, zones):
    alt = zone_maps(analysis, zones).alt
    assert "dunlin: most used are upper sand (59%), upper mud (29%) and lower sand (12%)" in alt
    assert "turnstone: most used are lower sand (90%)" in alt
    assert "core: 90% in 1 zone, 3 animals" in alt


def test_names_are_never_read_as_formulas(make, texts):
    zones = Zones(rows=("$x$",), columns=("a$b", "_c"), layout=(("$\\frac$", "d"),))
    drawing = zone_maps(make({"$\\alpha$": [[1, 1]] * 3}, zones), zones)
    drawing.figure.draw_without_rendering()
    assert any("$\\alpha$" in text for text in texts(drawing.figure))


@pytest.mark.parametrize("count", [1, 2, 5])
def test_one_panel_a_species(make, zones, count):
    use = {f"species {i}": [[1, 2, 3]] * 3 for i in range(count)}
    figure = zone_maps(make(use), zones).figure
    titled = [axes for axes in figure.axes if axes.get_title()]
    assert len(titled) == count
