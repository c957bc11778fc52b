import colorsys

import matplotlib as mpl
import numpy as np
import pytest
from matplotlib.colors import to_rgb

from niche.figures.drawing import PALETTE, SCALE, contrast, look, text_on


def test_contrast_follows_the_published_formula():
    assert contrast("black", "white") == pytest.approx(21.0)
    # sRGB 0.5 has luminance ((0.5 + 0.055) / 1.055) ** 2.4 = 0.21404.
    assert contrast("0.5", "white") == pytest.approx(1.05 / 0.26404, abs=1e-3)
    assert contrast("white", "#777777") == pytest.approx(4.48, abs=0.005)
    assert contrast("#E69F00", "white") == pytest.approx(2.25, abs=0.005)


def test_text_is_readable_on_every_colour_of_the_scale():
    colours = mpl.colormaps[SCALE](np.linspace(0, 1, 501))
    assert min(contrast(text_on(tuple(c)), tuple(c)) for c in colours) >= 4.5
    assert text_on("#002051") == "white"
    assert text_on("#fde737") == "black"


def test_the_first_two_colours_are_neither_blue_nor_green():
    for colour in PALETTE[:2]:
        hue = 360 * colorsys.rgb_to_hsv(*to_rgb(colour))[0]
        assert not 80 < hue < 270, colour


def test_the_look_overrules_the_machine_and_is_put_back():
    with mpl.rc_context({"font.size": 33.0, "text.usetex": True}):
        with look():
            assert mpl.rcParams["font.size"] == 10
            assert not mpl.rcParams["text.usetex"]
        assert mpl.rcParams["font.size"] == 33
