"""Filter inductors: core loss, winding loss, gap and saturation, temperature, size."""
