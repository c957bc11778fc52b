import pandas as pd
import pytest
from matplotlib.colors import to_hex
from matplotlib.dates import date2num

from niche.errors import ValueRuleError
from niche.figures import effort_timeline
from niche.figures.drawing import INK, PALETTE


@pytest.fixture
def by_day():
    return pd.DataFrame(
        {"dunlin": [1.5, 0.0, 2.25], "redshank": [0.5, 1.0, 0.0]}, index=["2026-09-02", "2026-09-03", "2026-09-20"]
    )


def test_bars_stand_on_their_dates(by_day):
    drawing = effort_timeline(by_day)
    first, second = drawing.figure.axes
    centres = [p.get_x() + p.get_width() / 2 for p in first.patches]
    assert centres == pytest.approx([date2num(pd.Timestamp(d)) for d in ("2026-09-02", "2026-09-20")])
    assert [p.get_height() for p in first.patches] == [1.5, 2.25]
    assert [p.get_height() for p in second.patches] == [0.5, 1.0]
    assert first.get_ylim() == second.get_ylim()
    assert first.get_ylim()[0] == 0


def test_strips_are_labelled_and_outlined(by_day):
    first, second = effort_timeline(by_day).figure.axes
    assert [first.get_title(loc=side) for side in ("left", "right")] == ["dunlin", "3.8 h on 2 dates, 2.2 h at most"]
    assert [second.get_title(loc=side) for side in ("left", "right")] == ["redshank", "1.5 h on 2 dates, 1.0 h at most"]
    for axes, colour in zip((first, second), PALETTE, strict=False):
        assert {to_hex(p.get_facecolor()) for p in axes.patches} == {colour.lower()}
        assert {to_hex(p.get_edgecolor()) for p in axes.patches} == {INK}


def test_the_alternative_text_has_dates_and_hours(by_day):
    alt = effort_timeline(by_day).alt
    assert "from 2026-09-02 to 2026-09-20" in alt
    assert "dunlin: 3.8 h on 2 dates" in alt


def test_bars_stay_visible_over_years():
    days = pd.date_range("2020-01-01", "2026-01-01", freq="90D").strftime("%Y-%m-%d")
    axes = effort_timeline(pd.DataFrame({"dunlin": [1.0] * len(days)}, index=days)).figure.axes[0]
    low, high = axes.get_xlim()
    assert axes.patches[0].get_width() / (high - low) > 0.003


def test_one_date_is_enough_and_none_is_refused(by_day):
    assert len(effort_timeline(by_day.iloc[:1]).figure.axes[0].patches) == 1
    with pytest.raises(ValueRuleError, match="at least one date"):
        effort_timeline(by_day.iloc[:0])
