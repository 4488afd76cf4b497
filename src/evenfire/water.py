"""Properties of water and steam by IAPWS-IF97; the only file that imports CoolProp.

Saturated states are built by vapour quality, never by temperature and pressure together, because on the
saturation line the latter picks one phase silently. Arguments are checked before the call and results
after it, because CoolProp returns ``inf`` inside an array where it would raise for a scalar.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from CoolProp.CoolProp import PropsSI

from evenfire.errors import OutOfRangeError, Problem, out_of_range

FloatArray = npt.NDArray[np.float64]

SMALLEST_PRESSURE_PA = 1.0e3
LARGEST_PRESSURE_PA = 200.0e5
SMALLEST_TEMPERATURE_K = 273.16
LARGEST_SATURATION_TEMPERATURE_K = 638.8
LARGEST_LIQUID_TEMPERATURE_K = 623.15

_FLUID = "IF97::Water"


@dataclass(frozen=True, slots=True, kw_only=True)
class Saturation:
    """Both phases in equilibrium at one pressure or at an array of pressures."""

    pressure_pa: FloatArray
    temperature_k: FloatArray
    enthalpy_liquid_j_kg: FloatArray
    enthalpy_vapour_j_kg: FloatArray
    density_liquid_kg_m3: FloatArray
    density_vapour_kg_m3: FloatArray
    internal_energy_liquid_j_kg: FloatArray
    internal_energy_vapour_j_kg: FloatArray


def saturation(pressure_pa: npt.ArrayLike) -> Saturation:
    """Properties of boiling water and dry saturated steam at a pressure.

    Parameters
    ----------
    pressure_pa : float or array
        Absolute pressure [Pa], 0.01 to 200 bar.

    Returns
    -------
    Saturation
        Arrays of the shape of ``pressure_pa`` (0-dimensional for a scalar).

    Raises
    ------
    OutOfRangeError
        P101 where a pressure is not finite or lies outside 1e3 to 2e7 Pa.

    References
    ----------
    IAPWS R7-97(2012), regions 1, 2, 3 and 4.

    Examples
    --------
    >>> steam = saturation(10e5)
    >>> round(float(steam.temperature_k), 6), round(float(steam.enthalpy_vapour_j_kg))
    (453.035632, 2777120)
    """
    pressure = _checked(
        pressure_pa, "P101", "absolute pressure", "Pa", SMALLEST_PRESSURE_PA, LARGEST_PRESSURE_PA
    )
    return Saturation(
        pressure_pa=pressure,
        temperature_k=_by_quality("T", pressure, 0.0),
        enthalpy_liquid_j_kg=_by_quality("H", pressure, 0.0),
        enthalpy_vapour_j_kg=_by_quality("H", pressure, 1.0),
        density_liquid_kg_m3=_by_quality("D", pressure, 0.0),
        density_vapour_kg_m3=_by_quality("D", pressure, 1.0),
        internal_energy_liquid_j_kg=_by_quality("U", pressure, 0.0),
        internal_energy_vapour_j_kg=_by_quality("U", pressure, 1.0),
    )


def saturation_temperature_k(pressure_pa: npt.ArrayLike) -> FloatArray:
    """Boiling temperature [K] at an absolute pressure [Pa] of 0.01 to 200 bar (IF97 region 4).

    >>> round(float(saturation_temperature_k(1e6)), 6)
    453.035632
    """
    pressure = _checked(
        pressure_pa, "P101", "absolute pressure", "Pa", SMALLEST_PRESSURE_PA, LARGEST_PRESSURE_PA
    )
    return _by_quality("T", pressure, 0.0)


def saturation_pressure_pa(temperature_k: npt.ArrayLike) -> FloatArray:
    """Boiling pressure [Pa] at a temperature [K] of 273.16 to 638.8 K (IF97 region 4).

    >>> round(float(saturation_pressure_pa(500.0)), 2)
    2638897.76
    """
    temperature = _checked(
        temperature_k,
        "P102",
        "saturation temperature",
        "K",
        SMALLEST_TEMPERATURE_K,
        LARGEST_SATURATION_TEMPERATURE_K,
    )
    return _property("P", "T", temperature, "Q", np.zeros_like(temperature))


def liquid_enthalpy_j_kg(temperature_k: npt.ArrayLike, pressure_pa: npt.ArrayLike) -> FloatArray:
    """Enthalpy [J/kg] of liquid water at or below its boiling temperature.

    Parameters
    ----------
    temperature_k : float or array
        Water temperature [K], 273.16 to 623.15.
    pressure_pa : float or array
        Absolute pressure [Pa], 0.01 to 200 bar, broadcast against ``temperature_k``.

    Raises
    ------
    OutOfRangeError
        P101 or P102 outside those ranges; P103 where the water would boil.

    References
    ----------
    IAPWS R7-97(2012), region 1.

    Examples
    --------
    >>> round(float(liquid_enthalpy_j_kg(300.0, 3e6)), 3)
    115331.273
    """
    temperature = _checked(
        temperature_k,
        "P102",
        "water temperature",
        "K",
        SMALLEST_TEMPERATURE_K,
        LARGEST_LIQUID_TEMPERATURE_K,
    )
    pressure = _checked(
        pressure_pa, "P101", "absolute pressure", "Pa", SMALLEST_PRESSURE_PA, LARGEST_PRESSURE_PA
    )
    temperature, pressure = (np.array(each) for each in np.broadcast_arrays(temperature, pressure))
    boiling = _by_quality("T", pressure, 0.0)
    too_hot = temperature > boiling
    if too_hot.any():
        hottest = int(np.argmax(temperature - boiling))
        raise OutOfRangeError(
            Problem(
                code="P103",
                where="water temperature",
                found=(
                    f"found {temperature.flat[hottest]:g} K at {pressure.flat[hottest]:g} Pa absolute, "
                    "where water would be steam"
                ),
                allowed=f"must not exceed the boiling temperature of {boiling.flat[hottest]:g} K",
            )
        )
    at_boiling = boiling - temperature < 1.0e-6
    liquid = _property("H", "T", np.where(at_boiling, boiling - 1.0e-6, temperature), "P", pressure)
    return np.where(at_boiling, _by_quality("H", pressure, 0.0), liquid)


def flash_steam_kg_m3(
    high_pa: float, low_pa: float, liquid_fill: float, steps: int = 64
) -> tuple[FloatArray, FloatArray]:
    """Mass left in a rigid vessel of boiling water while steam is drawn off and the pressure falls.

    Use it for the steam capacity of an accumulator and for the buffer of a boiler's own water.
    Dry saturated steam leaves, both phases stay in equilibrium, no heat passes the wall.

    With the density m of both phases together [kg/m3] and the energy density written as
    U = a m + k, where k = (u''-u')/(v''-v') and a = u' - v' k, the balance dU = h'' dm over a step from
    1 to 2 with the mean steam enthalpy h = (h''1+h''2)/2 is exactly

        m2 = (m1 (a1 - h) + k1 - k2) / (a2 - h).

    Parameters
    ----------
    high_pa, low_pa : float
        First and last absolute pressure [Pa]; with the first below the last the same line is followed upward.
    liquid_fill : float
        Volume fraction of liquid at ``high_pa`` [1].
    steps : int
        Steps reported; each is taken once whole and once in halves and extrapolated (Richardson), so
        the error is below 1e-7 of the released mass.

    Returns
    -------
    pressure_pa, mass_kg_m3 : arrays of length ``steps + 1``, from ``high_pa`` down to ``low_pa``.

    References
    ----------
    Derived from the balances; equal to the ordinary differential equation to all printed digits.

    Examples
    --------
    >>> _, mass = flash_steam_kg_m3(10e5, 5e5, 0.90)
    >>> round(float(mass[0] - mass[-1]), 4)
    45.8708
    """
    fine = 2 * steps
    pressure = np.linspace(high_pa, low_pa, fine + 1)
    at = saturation(pressure)
    v_liquid = 1.0 / at.density_liquid_kg_m3
    k = (at.internal_energy_vapour_j_kg - at.internal_energy_liquid_j_kg) / (
        1.0 / at.density_vapour_kg_m3 - v_liquid
    )
    a = at.internal_energy_liquid_j_kg - v_liquid * k
    start = liquid_fill * at.density_liquid_kg_m3[0] + (1.0 - liquid_fill) * at.density_vapour_kg_m3[0]

    def masses(stride: int) -> FloatArray:
        mass = [float(start)]
        for one in range(0, fine, stride):
            two = one + stride
            h = 0.5 * (at.enthalpy_vapour_j_kg[one] + at.enthalpy_vapour_j_kg[two])
            mass.append(float((mass[-1] * (a[one] - h) + k[one] - k[two]) / (a[two] - h)))
        return np.array(mass)

    whole, halved = masses(2), masses(1)[::2]
    return pressure[::2], halved + (halved - whole) / 3.0


def _by_quality(output: str, pressure_pa: FloatArray, quality: float) -> FloatArray:
    return _property(output, "P", pressure_pa, "Q", np.full_like(pressure_pa, quality))


def _checked(values: npt.ArrayLike, code: str, name: str, unit: str, low: float, high: float) -> FloatArray:
    array = np.asarray(values, dtype=np.float64)
    inside = (array >= low) & (array <= high)
    if not inside.all():
        worst = float(array[~inside].flat[0]) if array.ndim else float(array)
        raise out_of_range(code, name, worst, unit, low, high)
    return array


def _property(output: str, first: str, given: FloatArray, second: str, other: FloatArray) -> FloatArray:
    values = np.asarray(PropsSI(output, first, given.ravel(), second, other.ravel(), _FLUID))
    lost = ~np.isfinite(values)
    if lost.any():
        raise OutOfRangeError(
            Problem(
                code="P104",
                where=f"IF97 {output} of {first} and {second}",
                found=f"the property library gives no finite value at {given.flat[lost][0]:g}",
                allowed="stay clear of the edges of the IF97 ranges",
            )
        )
    return values.reshape(given.shape)
