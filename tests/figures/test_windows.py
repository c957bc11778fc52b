import math

import numpy as np
import pytest

from niche.errors import ValueRuleError
from niche.figures import coexistence_windows
from niche.figures.windows import windows

K = {"dunlin": (1400.0, 2100.0), "redshank": (800.0, 1000.0)}


def bars(figure):
    return [(p.get_x(), p.get_x() + p.get_width(), p.get_hatch()) for p in figure.axes[0].patches]


def test_a_window_goes_from_alpha_to_the_inverse_of_beta(analysis):
    a = analysis.coefficients.alpha
    first = windows(analysis, K)[0]
    assert (first.low, first.high) == (a.value[0, 1], 1 / a.value[1, 0])
    assert first.low_interval == (a.low[0, 1], a.high[0, 1])
    assert first.high_interval == (1 / a.high[1, 0], 1 / a.low[1, 0])
    assert first.given == (1.4, 2.625)
    assert [w.given for w in windows(analysis, K)[1:]] == [None, None]


def test_the_bars_are_the_windows_and_the_range_of_k(analysis):
    figure = coexistence_windows(analysis, K).figure
    found = windows(analysis, K)
    assert figure.axes[0].get_xscale() == "log"
    drawn = bars(figure)
    plain = [(low, high) for low, high, hatch in drawn if not hatch]
    np.testing.assert_allclose(plain, [(w.low, w.high) for w in found])
    np.testing.assert_allclose([(low, high) for low, high, hatch in drawn if hatch], [(1.4, 2.625)])
    lines = [
        line.get_xdata() for line in figure.axes[0].lines if len(line.get_xdata()) == 2 and line.get_marker() == "None"
    ]
    for window in found:
        for interval in (window.low_interval, window.high_interval):
            assert any(np.allclose(line, interval) for line in lines)


def test_the_direction_of_the_ratio_is_told(analysis):
    drawing = coexistence_windows(analysis, K)
    labels = [t.get_text() for t in drawing.figure.axes[0].get_yticklabels()]
    assert labels[0] == "K dunlin\n/ K redshank"
    assert "both persist for K dunlin / K redshank between" in drawing.alt
    assert "by the K given the ratio is 1.40 to 2.62" in drawing.alt


def test_without_k_no_second_bar_and_no_word_of_it(analysis):
    drawing = coexistence_windows(analysis)
    assert not any(hatch for _, _, hatch in bars(drawing.figure))
    legend = [t.get_text() for t in drawing.figure.legends[0].get_texts()]
    assert legend == ["both persist", "95% interval of each end"]
    assert "K given" not in drawing.alt


def test_no_shared_zone_gives_a_window_without_end(make):
    apart = make({"dunlin": [[1, 0, 0]] * 3, "redshank": [[0, 1, 1]] * 3})
    window = windows(apart)[0]
    assert (window.low, window.high) == (0.0, math.inf)
    drawing = coexistence_windows(apart)
    axes = drawing.figure.axes[0]
    low, high, _ = bars(drawing.figure)[0]
    assert (low, high) == pytest.approx(axes.get_xlim())
    arrows = {line.get_marker() for line in axes.lines} & {"<", ">"}
    assert arrows == {"<", ">"}
    assert "between 0 (0 to no limit) and no limit" in drawing.alt


def test_few_animals_and_no_use_are_told_in_words(few, unseen):
    assert "no interval" in [t.get_text() for t in coexistence_windows(few).figure.axes[0].texts]
    drawing = coexistence_windows(unseen)
    assert [t.get_text() for t in drawing.figure.axes[0].texts].count("not defined") == 2
    assert "the window for K dunlin / K redshank is not defined" in drawing.alt
    assert "nan" not in drawing.alt


def test_an_analysis_without_coefficients_is_refused(make):
    with pytest.raises(ValueRuleError, match="ask for the index 'alpha'"):
        coexistence_windows(make({"a": [[1, 2, 3]] * 3, "b": [[1, 2, 3]] * 3}, indices=["pianka"]))
