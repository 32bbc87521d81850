"""Numbers that are shown beside the comparison: stiffnesses for beam models, and indicators."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

import beam_theory
import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.levels import Levels, reason_at
from crosscheck.comparison.quantities import unit_text
from crosscheck.comparison.result import LEVELS, FeValue, PropertyRow
from crosscheck.section_file.model import NU_WITHOUT_MATERIAL, SectionFile

NO_COUNTERPART = FeValue(None, None, None, "estimate", reason="FE has no counterpart here")


@dataclass(frozen=True)
class _Stiffness:
    """One line of the table: field of beam_theory's record, symbol, words, dimension, and FE's quantity.

    ``modulus``: E, G, their inverse, or neither, which multiplies FE's quantity.
    """

    name: str
    symbol: str
    words: str
    length_power: int
    force_power: int
    quantity: str | None
    modulus: str = ""


_TABLE: tuple[_Stiffness, ...] = (
    _Stiffness("EA", "EA", "axial stiffness", 0, 1, "area", "E"),
    _Stiffness("EIxx", "EIxx", "bending stiffness about x", 2, 1, "second_moment_xx", "E"),
    _Stiffness("EIyy", "EIyy", "bending stiffness about y", 2, 1, "second_moment_yy", "E"),
    _Stiffness("EIxy", "EIxy", "coupling of bending", 2, 1, "product_moment_xy", "E"),
    _Stiffness("EIu", "EIu", "bending stiffness about u", 2, 1, "principal_moment_u", "E"),
    _Stiffness("EIv", "EIv", "bending stiffness about v", 2, 1, "principal_moment_v", "E"),
    _Stiffness("angle", "alpha", "from x to the axis u", 0, 0, "principal_angle"),
    _Stiffness("GJ", "GJ", "torsion stiffness", 2, 1, "torsion_constant", "G"),
    _Stiffness("EIw", "EI_w", "warping stiffness", 4, 1, "warping_constant", "E"),
    _Stiffness("GA_Vx", "GA_Vx", "shear stiffness along x", 0, 1, "shear_area_x", "G"),
    _Stiffness("GA_Vy", "GA_Vy", "shear stiffness along y", 0, 1, "shear_area_y", "G"),
    _Stiffness("coupling", "s_xy", "strain across x per Vy", 0, -1, None, "1/G"),
    _Stiffness("centroid_x", "x_c", "centroid from the origin, x", 1, 0, "centroid_x"),
    _Stiffness("centroid_y", "y_c", "centroid from the origin, y", 1, 0, "centroid_y"),
    _Stiffness("shear_centre_x", "x_s", "shear centre from the origin, x", 1, 0, "shear_centre_x"),
    _Stiffness("shear_centre_y", "y_s", "shear centre from the origin, y", 1, 0, "shear_centre_y"),
)

# Definition, its words, and the field of FE's record with Poisson's ratio. Without it both are A_V/A.
_COEFFICIENTS: tuple[tuple[str, str, str], ...] = (
    ("energy", "by energy", "energy_coefficient"),
    ("mean", "by mean displacement (Cowper)", "mean_coefficient"),
)

_WAGNER: tuple[tuple[str, str, str, int], ...] = (
    ("wagner_x", "beta_x", "Wagner coefficient of Mx", 1),
    ("wagner_y", "beta_y", "Wagner coefficient of My", 1),
    ("wagner_u", "beta_u", "Wagner coefficient about u", 1),
    ("wagner_v", "beta_v", "Wagner coefficient about v", 1),
    ("wagner_omega", "beta_w", "Wagner coefficient of B", 0),
    ("polar_radius_squared", "r_0^2", "polar radius squared about S", 2),
)


def stiffness_rows(
    section: SectionFile, levels: Levels, fe: Mapping[str, FeValue]
) -> tuple[PropertyRow, ...]:
    """EA, EI, GJ, E I_w, GA_V and the offsets of centroid and shear centre from the file's origin.

    Per unit modulus (E = 1 where E stands, G = 1 where G stands) where the file names no material.

    Parameters
    ----------
    section : SectionFile
        Units and materials.
    levels : Levels
        Theory.
    fe : mapping of name to FeValue
        FE's quantities.
    """
    E, G = models.young_modulus(section), models.shear_modulus(section)
    factors = {"E": E or 1.0, "G": G or 1.0, "1/G": 1.0 / (G or 1.0), "": 1.0}
    records = {
        level: beam_theory.stiffness(solution, factors["E"], factors["G"])
        for level, solution in levels.solutions.items()
    }
    rows = []
    for line in _TABLE:
        values, reasons = _by_level(levels, records, line.name)
        own = NO_COUNTERPART if line.quantity is None else fe[line.quantity]
        length, force = line.length_power, line.force_power
        if E is None and line.modulus:
            sign = -1 if line.modulus == "1/G" else 1
            length, force = length + 2 * sign, force - sign
        unit = (
            "rad"
            if line.name == "angle"
            else unit_text(length, force, section.length_unit, section.force_unit)
        )
        value = _scaled(own, factors[line.modulus])
        rows.append(PropertyRow(line.name, line.symbol, line.words, unit, values, value, reasons))
    return tuple(rows)


def shear_coefficient_rows(
    levels: Levels, fe: fe_models.Solution, values: Mapping[str, FeValue]
) -> tuple[PropertyRow, ...]:
    """Shear coefficients A_V/A along x and y by two definitions, which differ only with Poisson's ratio.

    By energy: V^2/(2 k G A) is the strain energy of the shear stress. By mean displacement (Cowper 1966):
    V/(k G A) is mean slope plus mean rotation.
    """
    rows = []
    area = values["area"]
    for name, words, record in _COEFFICIENTS:
        for i, axis in enumerate("xy"):
            kind = f"shear_area_{axis}"
            own, whole = levels.values(kind), levels.values("area")
            theory = {level: _ratio(own[level], whole[level]) for level in LEVELS}
            reasons = {**levels.reasons("area"), **levels.reasons(kind)}
            value = values[kind]
            if area.value:
                value = _scaled(value, 1.0 / area.value)
            nu = None if fe.poisson is None else float(getattr(fe.poisson, record)[i])
            rows.append(
                PropertyRow(
                    f"shear_coefficient_{name}_{axis}", f"k_{axis}", f"shear coefficient {axis}, {words}",
                    "1", theory, replace(value, with_nu=nu), reasons,
                )
            )  # fmt: skip
    return tuple(rows)


def _ratio(above: float | None, below: float | None) -> float | None:
    return None if above is None or not below else above / below


def indicator_rows(
    section: SectionFile, levels: Levels, fe: Mapping[str, FeValue]
) -> tuple[PropertyRow, ...]:
    """Characteristic length sqrt(E I_w/(G J)) of restrained warping, and Wagner coefficients.

    Wagner coefficients are defined in ``beam_theory.faces.wagner_coefficients``. Without materials E/G is
    2 (1 + nu) with nu = 0.3.
    """
    E, G = models.young_modulus(section), models.shear_modulus(section)
    ratio = 2.0 * (1.0 + NU_WITHOUT_MATERIAL) if E is None or G is None else E / G
    records = {level: beam_theory.stiffness(s, ratio, 1.0) for level, s in levels.solutions.items()}
    values, reasons = _by_level(levels, records, "characteristic_length")
    unit = section.length_unit
    rows = [
        PropertyRow(
            "characteristic_length", "l_w", "length of restrained warping", unit, values,
            _characteristic_length(fe, ratio), reasons,
        )
    ]  # fmt: skip
    for name, symbol, words, power in _WAGNER:
        found, missing = levels.values(name), levels.reasons(name)
        text = unit_text(power, 0, section.length_unit, section.force_unit)
        rows.append(PropertyRow(name, symbol, words, text, found, NO_COUNTERPART, missing))
    return tuple(rows)


def _by_level(
    levels: Levels,
    records: Mapping[str, beam_theory.Stiffness],
    name: str,
) -> tuple[dict[str, float | None], dict[str, str]]:
    """One stiffness by its name at every level, and why a level has none."""
    found: dict[str, beam_theory.Quantity] = {}
    for level in LEVELS:
        record = records.get(level)
        missing = beam_theory.Quantity(None, levels.refused.get(level))
        found[level] = missing if record is None else getattr(record, name)
    values = {level: quantity.value for level, quantity in found.items()}
    reasons = {
        level: reason_at(level, quantity.reason)
        for level, quantity in found.items()
        if quantity.value is None
    }
    return values, reasons


def _scaled(value: FeValue, factor: float) -> FeValue:
    """An FE value and its interval times a modulus."""
    if value.value is None or value.low is None or value.high is None:
        return value
    nu = None if value.with_nu is None else value.with_nu * factor
    return replace(
        value, value=value.value * factor, low=value.low * factor, high=value.high * factor, with_nu=nu
    )


def _characteristic_length(fe: Mapping[str, FeValue], ratio: float) -> FeValue:
    """sqrt(E I_w/(G J)) of FE with its interval; ``ratio`` is E/G."""
    warping, torsion = fe["warping_constant"], fe["torsion_constant"]
    if warping.value is None or not torsion.value or not torsion.low or not torsion.high:
        return FeValue(None, None, None, "estimate", reason=warping.reason or torsion.reason)
    low = math.sqrt(ratio * max(warping.low or 0.0, 0.0) / torsion.high)
    high = math.sqrt(ratio * max(warping.high or 0.0, 0.0) / torsion.low)
    return FeValue(math.sqrt(ratio * max(warping.value, 0.0) / torsion.value), low, high, "estimate")
