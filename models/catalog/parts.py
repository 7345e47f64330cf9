"""What the catalogue holds: one frozen dataclass for each kind of part, SI units throughout.

Temperatures are in degrees Celsius [C], prices in the currency of the cost table [currency]. Every part
carries `origin`: for each field the words that say where the value comes from. Values describe a class of
parts, not a part one can order; replace them by a data sheet's before anything is built.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from models.catalog.clamp_diode import ClampDiode
from models.catalog.cost_model import CostModel
from models.catalog.emission_parts import ChokeMaterial, EmissionLimit
from models.catalog.limits import LimitBand, LimitTable
from models.catalog.part_table import PartTable
from models.cooling.fan import Fan

__all__ = [
    "DEVICE_CLASSES",
    "AcCapacitor",
    "Catalog",
    "ChokeMaterial",
    "ClampDiode",
    "Conductor",
    "CoreMaterial",
    "CoreShape",
    "CostModel",
    "DcLinkCapacitor",
    "Device",
    "EmissionLimit",
    "Fan",
    "LimitBand",
    "LimitTable",
    "PartTable",
]


DEVICE_CLASSES = (
    "low-voltage MOSFET",
    "silicon IGBT",
    "superjunction MOSFET",
    "SiC MOSFET",
    "GaN HEMT",
    "IGCT",
    "GTO",
)


@dataclass(frozen=True)
class Device:
    """A switch with its freewheeling path: a class of semiconductor, to be scaled by die area."""

    name: str
    device_class: str  # one of DEVICE_CLASSES
    voltage_rating_v: float  # [V]
    voltage_use_limit: float  # greatest dc voltage over the rating, two-level leg [-]
    die_area_min_m2: float  # switch die [m2]
    die_area_max_m2: float  # switch die that one package holds [m2]
    reference_current_density_a_per_m2: float  # rated current over switch die area [A/m2]
    # conduction: v = threshold + slope_area / area * i, linear in temperature between 25 C and hot_c
    threshold_25_v: float  # [V]
    threshold_hot_v: float  # [V]
    slope_area_25_ohm_m2: float  # [Ohm m2]
    slope_area_hot_ohm_m2: float  # [Ohm m2]
    hot_c: float  # temperature of the hot conduction values [C]
    dynamic_resistance_factor: float  # on-resistance under hard switching over static [-]
    shared_die: bool  # True: reverse current flows in the switch die, through the channel
    # diode: per diode die area; of a shared die it conducts in the dead time only
    diode_area_share: float  # diode die over switch die [-]
    diode_threshold_25_v: float  # [V]
    diode_threshold_hot_v: float  # [V]
    diode_slope_area_25_ohm_m2: float  # [Ohm m2]
    diode_slope_area_hot_ohm_m2: float  # [Ohm m2]
    # switching: E = e I V_ref (I/I_ref)^(k_i - 1) (V/V_ref)^k_v [1 - k_T (T_hot - T)]
    energy_reference_voltage_v: float  # V_ref [V]
    turn_on_energy_j_per_av: float  # at rated current, hot [J/(A V)]
    turn_off_energy_j_per_av: float  # [J/(A V)]
    recovery_energy_j_per_av: float  # 0 where the turn-on energy contains it [J/(A V)]
    turn_on_current_exponent: float  # [-]
    turn_off_current_exponent: float  # [-]
    recovery_current_exponent: float  # [-]
    energy_voltage_exponent: float  # of turn-on and turn-off [-]
    recovery_voltage_exponent: float  # [-]
    energy_hot_c: float  # T_hot [C]
    turn_on_temperature_coefficient_per_k: float  # refers to the hot value [1/K]
    turn_off_temperature_coefficient_per_k: float  # [1/K]
    recovery_temperature_coefficient_per_k: float  # [1/K]
    turn_on_includes_output_charge: bool  # True: do not add Q_oss V to the turn-on energy
    output_charge_c_per_m2: float  # at the reference voltage, of one switch [C/m2]
    output_charge_voltage_exponent: float  # Q ~ V^x [-]
    output_energy_j_per_m2: float  # at the reference voltage, of one switch [J/m2]
    gate_charge_c_per_m2: float  # over the gate swing [C/m2]
    gate_swing_v: float  # on minus off gate voltage [V]
    # thermal: R_jc = junction_case / A_ref (A_ref / A)^exponent
    junction_case_k_m2_per_w: float  # thermal resistance times die area [K m2/W]
    junction_case_reference_area_m2: float  # A_ref [m2]
    junction_case_exponent: float  # [-]
    diode_junction_case_factor: float  # diode over switch at equal die area [-]
    case_sink_k_per_w: float  # one package, insulation included [K/W]
    mounting_area_m2: float  # footprint on the heatsink [m2]
    package_volume_m3: float  # [m3]
    junction_limit_c: float  # [C]
    dead_time_s: float  # [s]
    price_per_area_per_m2: float  # of switch die area, package apart [currency/m2]
    package_price: float  # [currency]
    switch_node_capacitance_f: float  # package tab to heatsink through the insulation [F]
    gate_unit_power_w: float = 0.0  # of one package's gate unit, whatever the frequency [W]
    greatest_switching_frequency_hz: float = math.inf  # least on and off times, snubber recovery [Hz]
    # part of an energy at rated current that is there without current: E ~ (1 - c) (I/I_ref)^k_i + c
    turn_on_constant_share: float = 0.0  # [-]
    turn_off_constant_share: float = 0.0  # [-]
    recovery_constant_share: float = 0.0  # [-]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)


@dataclass(frozen=True)
class CoreMaterial:
    """Magnetic material. Loss is k f^alpha B^beta in W/m3, Hz and T (sine peak), band by band."""

    name: str
    kind: str  # "gapped" (an air gap sets the inductance) or "powder" (the gap is spread in the material)
    families: tuple[str, ...]  # core shape families it is sold in
    saturation_t: float  # at 100 C [T]
    initial_permeability: float  # relative [-]
    density_kg_m3: float  # of the solid material [kg/m3]
    band_min_hz: tuple[float, ...]  # [Hz]
    band_max_hz: tuple[float, ...]  # [Hz]
    steinmetz_k: tuple[float, ...]  # [W/m3 with Hz and T]
    steinmetz_alpha: tuple[float, ...]  # [-]
    steinmetz_beta: tuple[float, ...]  # [-]
    line_loss_w_per_m3: float  # 50 Hz, 1.0 T sine peak [W/m3]
    line_loss_exponent: float  # of that loss on flux density [-]
    loss_factor: float  # penalty of the cut and bonded core on the loss law, 1 where none [-]
    bias_loss_factor: float  # loss with dc field over loss without, 1 where none [-]
    rolloff_field_a_per_m: float  # H_50, mu/mu_i = 1/(1 + (H/H_50)^c); infinite for gapped cores [A/m]
    rolloff_exponent: float  # c [-]
    temperature_limit_c: float  # continuous [C]
    price_per_kg: float  # finished core [currency/kg]
    area_factor: float  # iron area over the area listed with the shape [-]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)


THREE_LIMB = "three-limb"  # one core for three phases; listed with a phase's share of it
TAPE_FAMILIES = ("cut C", THREE_LIMB)


@dataclass(frozen=True)
class CoreShape:
    """A core set of one size (pair of halves, ring, or cut core), bare of bobbin."""

    name: str
    family: str  # "E", "ETD", "PQ", "RM", "U", "toroid powder", "toroid ferrite", "cut C" or "three-limb"
    area_m2: float  # effective area A_e [m2]
    path_length_m: float  # effective length l_e [m]
    core_volume_m3: float  # effective volume V_e [m3]
    window_area_m2: float  # bare window, of all coils together [m2]
    window_breadth_m: float  # winding breadth along a layer [m]
    coil_count: int  # coils in series that share the winding: 1, or 2 on the legs of U and cut C cores
    mean_turn_length_m: float  # [m]
    box_volume_m3: float  # box around the wound core [m3]
    stack_depth_m: float  # depth by which one more stacked core grows; 0 where not practised [m]
    stackable: bool
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)

    @property
    def in_hole(self) -> bool:
        """Whether the winding goes through the hole of a ring, without a coil former."""
        return self.family.startswith("toroid")

    @property
    def wound_of_tape(self) -> bool:
        """Whether the core is wound of tape or strip, whose width is the stack depth."""
        return self.family in TAPE_FAMILIES


@dataclass(frozen=True)
class Conductor:
    """Winding conductor. Copper shares are of the bare window; 0 means not possible there."""

    name: str
    kind: str  # "round", "litz" or "foil"
    strand_diameter_m: float  # bare; the greatest one for round wire; 0 for foil [m]
    strand_outer_factor: float  # diameter (foil: thickness) over enamel over bare [-]
    copper_share_bobbin: float  # [-]
    copper_share_toroid: float  # [-]
    resistance_factor: float  # longer strand path and broken strands, on the dc resistance [-]
    price_per_kg: float  # [currency/kg]
    insulation_limit_c: float  # [C]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)


@dataclass(frozen=True)
class AcCapacitor:
    """Film capacitor for the ac filter, scaled by capacitance at its rated voltage."""

    name: str
    voltage_rating_v_ac: float  # rms [V]
    volume_m3_per_f: float  # [m3/F]
    current_a_per_f: float  # greatest rms current over capacitance [A/F]
    loss_tangent: float  # [-]
    price_per_f: float  # [currency/F]
    price_fixed: float  # [currency]
    density_kg_m3: float  # [kg/m3]
    temperature_limit_c: float  # [C]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)


@dataclass(frozen=True)
class DcLinkCapacitor:
    """One capacitor of a dc-link bank; a bank puts a number of them in series and parallel."""

    name: str
    technology: str  # "film" or "electrolytic"
    voltage_rating_v: float  # [V]
    unit_capacitance_f: float  # [F]
    unit_volume_m3: float  # of the box around it [m3]
    unit_ripple_a: float  # rated rms ripple current: 100 Hz (electrolytic) or 10 kHz (film) [A]
    ripple_multiplier_high: float  # rated current at 10 kHz and above over that at the rating frequency [-]
    unit_esr_low_ohm: float  # 100 Hz, working temperature [Ohm]
    unit_esr_high_ohm: float  # 10 kHz and above, working temperature [Ohm]
    rated_life_h: float  # at rated voltage, rated ripple and life_temperature_c [h]
    life_temperature_c: float  # [C]
    unit_price: float  # [currency]
    density_kg_m3: float  # mass over boxed volume [kg/m3]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)


@dataclass(frozen=True)
class Catalog:
    """All parts and tables a study chooses from."""

    devices: PartTable[Device]
    clamp_diodes: PartTable[ClampDiode]
    core_materials: PartTable[CoreMaterial]
    core_shapes: PartTable[CoreShape]
    conductors: PartTable[Conductor]
    ac_capacitors: PartTable[AcCapacitor]
    dc_link_capacitors: PartTable[DcLinkCapacitor]
    fans: PartTable[Fan]
    choke_materials: PartTable[ChokeMaterial]
    emission_limits: PartTable[EmissionLimit]
    limit_tables: tuple[LimitTable, ...]
    cost: CostModel

    def limit_table(self, name: str) -> LimitTable:
        """The limit table called `name`.

        Raises
        ------
        ValueError
            If there is none; the message holds the nearest name.
        """
        return self.limit_tables[PartTable(self.limit_tables).index(name)]
