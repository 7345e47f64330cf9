"""Published rows of the groups under test that no test of this stage holds, each with its reason.

A row leaves this list when the code it needs arrives; `test_row_coverage.py` sees to it that every row is
either tested or listed here, and that none is both.
"""

from __future__ import annotations

GROUPS = ("1 PWM harmonics", "2 device stress", "3 DC link", "4 magnetics", "8 LCL and interleaving")
LIMITS = ("LIM-EU", "LIM-CEC", "LIM-EUX", "LIM-CECX")

INTERLEAVING = "interleaved legs are not modelled yet"
GAUGE = "a formula of the standard: the models take diameters and areas in metres, no gauge numbers"
RING = "ring dimensions are catalogue data; the models derive no A_e, l_e from diameters"
GEOMETRY = "sizing goes by the area product, not by the core-geometry coefficient"

LATER: dict[str, str] = {
    "MAG-AWG20-d": GAUGE,
    "MAG-LITZK": "the row itself asks not to test against it until its table has been read",
    "MAG-N87a": "one maker's grade; the catalogue holds classes, whose values have range rows of their own",
    "MAG-KG1": GEOMETRY,
    "MAG-KG2": GEOMETRY,
    "MAG-KG3": GEOMETRY,
    "MAG-TOR-R25.3": RING,
    "MAG-TOR-R36": RING,
    "MAG-TOR-R63": RING,
    "MAG-POW1": "stored energy L I^2/2 alone: no model computes it",
    "MAG-POW2": "the ampere-turns come from a maker's curve, not from a formula",
    "LCL-INT-2-25": INTERLEAVING,
    "LCL-INT-2-50": INTERLEAVING,
    "LCL-INT-3-50": INTERLEAVING,
    "LCL-INT-4-30": INTERLEAVING,
}  # fmt: skip

CORES = "test_catalog_cores.py"
EXACT = "test_exact_waveforms.py"
ELSEWHERE: dict[str, str] = {
    "PWM-RIP-3L": EXACT,
    "DEV-3L-": EXACT,
    "DEV-SLF-dpwm120-00": "test_exact_sidebands.py",
    "MAG-EE-E42": CORES,
    "MAG-EE-E55": CORES,
    "MAG-ETD34": CORES,
    "MAG-ETD39": CORES,
    "MAG-ETD44": CORES,
    "MAG-ETD49": CORES,
    "MAG-PQ20_20": CORES,
    "MAG-PQ26_25": CORES,
    "MAG-PQ32_30": CORES,
    "MAG-PQ40_40": CORES,
    "MAG-PQ50_50": CORES,
}
"""Rows that another module of this folder names; a name that ends in a dash stands for all that begin so."""
