import numpy as np
import pytest
from matplotlib.colors import to_rgba

from niche.errors import ValueRuleError
from niche.figures import overlap_intervals, overlap_matrix

DRAW = [overlap_matrix, overlap_intervals]


def test_the_matrix_has_each_pair_once_with_its_interval(analysis):
    e = analysis.overlap["pianka"]
    axes = overlap_matrix(analysis).figure.axes[0]
    found = {t.get_position(): t.get_text() for t in axes.texts}
    expected = {
        (s + 0.5, t - 0.5): f"{e.value[s, t]:.2f}\n{e.low[s, t]:.2f}–{e.high[s, t]:.2f}"
        for s, t in [(0, 1), (0, 2), (1, 2)]
    }
    assert found == expected
    assert [t.get_text() for t in axes.get_xticklabels()] == ["dunlin", "redshank"]
    assert [t.get_text() for t in axes.get_yticklabels()] == ["redshank", "turnstone"]
    cells = axes.collections[0].get_array()
    np.testing.assert_array_equal(np.ma.getmaskarray(cells), [[False, True], [False, False]])
    np.testing.assert_allclose(cells.compressed(), [e.value[0, 1], e.value[0, 2], e.value[1, 2]])
    assert axes.collections[0].get_clim() == (0, 1)


def test_the_intervals_end_where_the_analysis_says(analysis):
    e = analysis.overlap["pianka"]
    axes = overlap_intervals(analysis).figure.axes[0]
    bars = [line.get_xdata() for line in axes.lines if len(line.get_xdata()) == 2]
    pairs = [(0, 1), (0, 2), (1, 2)]
    np.testing.assert_allclose(bars, [[e.low[p], e.high[p]] for p in pairs])
    dots = [line.get_xdata()[0] for line in axes.lines if line.get_marker() == "o"]
    np.testing.assert_allclose(dots, [e.value[p] for p in pairs])
    pooled = [line for line in axes.lines if line.get_marker() == "D"]
    np.testing.assert_allclose([line.get_xdata()[0] for line in pooled], [e.pooled[p] for p in pairs])
    assert all(to_rgba(line.get_markerfacecolor())[3] == 0 for line in pooled)
    assert next(t.get_text() for t in axes.get_yticklabels()) == "dunlin – redshank"


@pytest.mark.parametrize("draw", DRAW)
def test_few_animals_give_words_in_place_of_an_interval(few, draw):
    drawing = draw(few)
    assert any("no interval" in t.get_text() for t in drawing.figure.axes[0].texts)
    assert "no interval" in drawing.alt
    assert "nan" not in drawing.alt


@pytest.mark.parametrize("draw", DRAW)
def test_what_is_not_defined_is_named_so(unseen, draw):
    drawing = draw(unseen)
    assert [t.get_text() for t in drawing.figure.axes[0].texts].count("not defined") == 2
    assert "not defined" in drawing.alt
    assert "nan" not in drawing.alt


def test_the_matrix_tells_the_largest_first(analysis):
    alt = overlap_matrix(analysis).alt
    order = [alt.index(pair) for pair in ("dunlin and redshank", "redshank and turnstone", "dunlin and turnstone")]
    values = analysis.overlap["pianka"].value
    assert values[0, 1] > values[1, 2] > values[0, 2]
    assert order == sorted(order)
    assert "95% intervals" in alt


@pytest.mark.parametrize("draw", DRAW)
def test_another_index_can_be_drawn(analysis, draw):
    drawing = draw(analysis, "schoener")
    assert drawing.name.endswith("schoener")
    assert f"{analysis.overlap['schoener'].value[0, 1]:.2f}" in drawing.alt


@pytest.mark.parametrize("draw", DRAW)
def test_errors_say_what_is_there(analysis, make, draw):
    with pytest.raises(ValueRuleError, match="no overlap 'levins' in the analysis; there are pianka, morisita_horn"):
        draw(analysis, "levins")
    with pytest.raises(ValueRuleError, match="needs two species; the analysis has 1"):
        draw(make({"dunlin": [[1, 2, 3]] * 3}))


def test_writing_direction_swaps_no_pair(make):
    axes = overlap_intervals(make({"כרון": [[1, 2, 3]] * 3, "dunlin": [[3, 2, 1]] * 3})).figure.axes[0]
    assert [t.get_text() for t in axes.get_yticklabels()] == ["כרון\ndunlin"]
