"""Colours that stay apart for everyone, and classes that keep theirs.

The colour-vision matrices are those of Machado, Oliveira & Fernandes (2009), severity 1.0, from memory; sRGB
and CIELAB constants are those of IEC 61966-2-1 and CIE 15.
"""

import itertools

import numpy as np
import pytest

from optimizer.charts.look import FIRST_CLASSES, PALETTE, SHAPES, class_scales

VISION = {
    "ordinary": np.eye(3),
    "protanopia": [
        [0.152286, 1.052583, -0.204868],
        [0.114503, 0.786281, 0.099216],
        [-0.003882, -0.048116, 1.051998],
    ],
    "deuteranopia": [
        [0.367322, 0.860646, -0.227968],
        [0.280085, 0.672501, 0.047413],
        [-0.011820, 0.042940, 0.968881],
    ],
    "tritanopia": [
        [1.255528, -0.076749, -0.178779],
        [-0.078411, 0.930809, 0.147602],
        [0.004733, 0.691367, 0.303900],
    ],
}
TO_XYZ = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
WHITE = TO_XYZ.sum(1)
APART = 20.0
"""CIE 1976 colour difference that marks of a few pixels need; a judgement, common practice, no source."""


def linear(colour):
    part = np.array([int(colour[place : place + 2], 16) for place in (1, 3, 5)]) / 255.0
    return np.where(part <= 0.04045, part / 12.92, ((part + 0.055) / 1.055) ** 2.4)


def lab(colour):
    ratio = TO_XYZ @ colour / WHITE
    x, y, z = np.where(ratio > (6 / 29) ** 3, np.cbrt(ratio), ratio / (3 * (6 / 29) ** 2) + 4 / 29)
    return np.array([116.0 * y - 16.0, 500.0 * (x - y), 200.0 * (y - z)])


@pytest.mark.parametrize("vision", VISION)
def test_any_two_colours_stay_apart(vision):
    seen = [lab(np.clip(np.asarray(VISION[vision]) @ linear(colour), 0.0, 1.0)) for colour in PALETTE]
    assert min(np.linalg.norm(a - b) for a, b in itertools.combinations(seen, 2)) > APART


def test_every_colour_stands_out_from_the_paper():
    """3:1 of contrast would rule out bright marks; 2:1 with outlines and shapes is a judgement, no source."""
    for colour in PALETTE:
        luminance = TO_XYZ[1] @ linear(colour)
        assert 1.05 / (luminance + 0.05) > 2.0


def test_a_class_looks_the_same_whatever_it_is_compared_with():
    all_colours, all_shapes = (scale.to_dict() for scale in class_scales(FIRST_CLASSES))
    colours, shapes = (scale.to_dict() for scale in class_scales(["SiC MOSFET", "my own class"]))
    place = FIRST_CLASSES.index("SiC MOSFET")
    assert colours["range"][0] == all_colours["range"][place]
    assert shapes["range"][0] == all_shapes["range"][place]
    assert colours["range"][1] not in all_colours["range"]


def test_eight_classes_have_eight_colours_and_shapes_and_more_are_still_told_apart():
    names = [f"class {number}" for number in range(12)]
    colours, shapes = (scale.to_dict()["range"] for scale in class_scales([*FIRST_CLASSES, *names[:4]]))
    assert len(set(colours)) == len(set(shapes)) == len(PALETTE) == len(SHAPES) == 8
    colours, shapes = (scale.to_dict()["range"] for scale in class_scales(names))
    assert len(set(zip(colours, shapes, strict=True))) == 12
