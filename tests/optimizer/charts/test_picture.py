"""The still picture for a page of text."""

import struct

from optimizer.charts import front_picture

LARGEST = 300_000


def test_it_is_a_png_of_a_sensible_shape_and_size(drawn):
    picture = front_picture(drawn.study, drawn.front, drawn.evaluated)
    assert picture[:8] == b"\x89PNG\r\n\x1a\n"
    width, height = struct.unpack(">II", picture[16:24])
    assert 900 < width < 1600
    assert 350 < height < 900
    assert 10_000 < len(picture) < LARGEST
