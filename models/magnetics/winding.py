"""Resistance of windings: copper over temperature, skin and proximity effect in round wire, foil and litz."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.constants import mu_0
from scipy.special import bei, beip, ber, berp

Array = NDArray[np.float64]
COPPER_RESISTIVITY_20 = 1.7241e-8  # ohm m, 100 % of the International Annealed Copper Standard
COPPER_COEFFICIENT_20 = 0.00393  # 1/K, same standard
COPPER_DENSITY = 8890.0  # kg/m3


def copper_resistivity(temperature_c: Array) -> Array:
    """Resistivity of annealed copper [ohm m] at a temperature [degC]. Source: IEC 60028."""
    return COPPER_RESISTIVITY_20 * (1.0 + COPPER_COEFFICIENT_20 * (np.asarray(temperature_c) - 20.0))


def skin_depth(frequency_hz: Array, resistivity: Array) -> Array:
    """Skin depth sqrt(rho/(pi f mu0)) [m] for a resistivity [ohm m]."""
    return np.sqrt(resistivity / (np.pi * mu_0 * frequency_hz))


def skin_and_proximity(penetration: Array) -> tuple[Array, Array]:
    """Dowell's two functions of layer thickness over skin depth, thickness included [-].

    Args:
        penetration: layer thickness over skin depth [-].

    Returns:
        Depth (sinh 2x + sin 2x)/(cosh 2x - cos 2x), the layer's own resistance over dc, and depth
        (sinh x - sin x)/(cosh x + cos x), a third of the loss in a field that the whole layer lies in.
    """
    depth = np.clip(penetration, 1e-3, 40.0)
    grown = np.exp(depth)
    sinh, cosh = 0.5 * (grown - 1.0 / grown), 0.5 * (grown + 1.0 / grown)
    sine, cosine = np.sin(depth), np.cos(depth)
    skin = (sinh * cosh + sine * cosine) / (sinh**2 + sine**2)
    return depth * skin, depth * (sinh - sine) / (cosh + cosine)


def dowell_ratio(penetration: Array, layers: Array) -> Array:
    """Ac over dc resistance of a winding portion whose mmf rises from zero, layer by layer.

    Args:
        penetration: layer thickness over skin depth, times sqrt(porosity) for wires [-].
        layers: number of layers, need not be whole [-].

    Returns:
        Resistance ratio, 1 at dc [-].

    Source: Dowell (1966); porosity after Ferreira (1994).
    """
    skin, near = skin_and_proximity(penetration)
    return skin + 2.0 / 3.0 * (np.square(layers) - 1.0) * near


def round_wire_skin_ratio(diameter_over_skin_depth: Array) -> Array:
    """Ac over dc resistance of an isolated round wire, exact [-]. Source: Kelvin functions, Terman (1943)."""
    q = np.asarray(diameter_over_skin_depth) / np.sqrt(2.0)
    numerator = ber(q) * beip(q) - bei(q) * berp(q)
    return 0.5 * q * numerator / (berp(q) ** 2 + beip(q) ** 2)


def litz_ratio(
    frequency_hz: Array,
    strands: Array,
    turns: Array,
    strand_diameter: Array,
    breadth: Array,
    resistivity: Array,
) -> Array:
    """Ac over dc resistance of a litz winding, low-frequency proximity form.

    Args:
        frequency_hz: [Hz].
        strands: strands per turn [-].
        turns: turns of the winding portion [-].
        strand_diameter: bare [m].
        breadth: winding breadth [m].
        resistivity: [ohm m].

    Returns:
        1 + pi^2 omega^2 mu0^2 N^2 n^2 d^6/(768 rho^2 b^2), field zero at one side [-].

    Source: Sullivan (1999), eq. 1-2 with k = 1.
    """
    omega = 2.0 * np.pi * frequency_hz
    field = np.pi * omega * mu_0 * turns * strands / (resistivity * breadth)
    return 1.0 + np.square(field) * strand_diameter**6 / 768.0


def wire_porosity(wires: Array, layers: Array, diameter: Array, breadth: Array) -> tuple[Array, Array]:
    """Round wires as sheets: side d sqrt(pi)/2 of the square of equal area [m], and its share of the breadth.

    Args:
        wires: turns of the winding portion times parallel wires [-].
        layers: in which they lie [-].
        diameter: bare [m].
        breadth: of the winding [m].

    Source: Dowell (1966).
    """
    side = 0.5 * np.sqrt(np.pi) * diameter
    return side, np.minimum(side * wires / (layers * breadth), 1.0)


def wire_ratio(
    frequency_hz: Array,
    wires: Array,
    layers: Array,
    diameter: Array,
    breadth: Array,
    resistivity: Array,
) -> Array:
    """Ac over dc resistance of a winding of (parallel) solid round wires by Dowell's method [-].

    Args:
        frequency_hz, breadth, resistivity: as in `litz_ratio`.
        wires, layers, diameter: as in `wire_porosity`.
    """
    side, porosity = wire_porosity(wires, layers, diameter, breadth)
    return dowell_ratio(side / skin_depth(frequency_hz, resistivity) * np.sqrt(porosity), layers)


def foil_ratio(frequency_hz: Array, turns: Array, thickness: Array, resistivity: Array) -> Array:
    """Ac over dc resistance of a foil winding of one turn a layer, by Dowell's method [-]."""
    return dowell_ratio(thickness / skin_depth(frequency_hz, resistivity), turns)
