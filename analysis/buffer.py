"""Reference buffers for the calibration of pH electrodes, and the ion product of water, against temperature.

References
----------
Hetzer, Durst, Robinson, Bates, J. Res. NBS 81A (1977) 21 (phthalate); IUPAC recommendations 1985 (phosphate,
borax); Bandura, Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15 and IAPWS R11-07 (ion product of water); CODATA
constants.
"""

from __future__ import annotations

import math

from analysis.water import water_density

KELVIN = 273.15
GAS, FARADAY = 8.31446261815324, 96485.33212  # J/(mol K), C/mol; exact since 2019
# pH = a / T + b + c T + d T^2, T in kelvin.
BUFFERS = {
    "phthalate": (2073.44, -13.3270, 0.045199, -3.4846e-5),  # 0.05 mol/kg potassium hydrogen phthalate
    "phosphate": (3459.39, -21.0574, 0.073301, -6.2266e-5),  # 0.025 mol/kg KH2PO4 with 0.025 mol/kg Na2HPO4
    "borax": (5259.02, -33.1064, 0.114826, -1.0786e-4),  # 0.01 mol/kg disodium tetraborate
}
WARMEST = {"phthalate": 50.0, "phosphate": 50.0, "borax": 50.0}


def buffer_ph(buffer: str, *, temperature: float) -> float:
    """pH of a reference buffer at a temperature [degC], 0 to 50.

    Raises
    ------
    ValueError
        When the buffer is not known or the temperature is outside the range of the equations.
    """
    if buffer not in BUFFERS:
        raise ValueError(f"Buffer is {buffer!r}; expected one of {', '.join(BUFFERS)}.")
    _within(temperature, highest=WARMEST[buffer])
    a, b, c, d = BUFFERS[buffer]
    kelvin = temperature + KELVIN
    return a / kelvin + b + c * kelvin + d * kelvin**2


def nernst_slope(temperature: float) -> float:
    """Ideal slope of a pH electrode [mV per pH] at a temperature [degC]: ln10 R T / F."""
    _within(temperature, highest=100.0)
    return 1000 * math.log(10) * GAS * (temperature + KELVIN) / FARADAY


def electrode_slope(
    *, first_ph: float, first_mv: float, second_ph: float, second_mv: float, temperature: float
) -> float:
    """Slope of an electrode between two buffers, in percent of the ideal one.

    Parameters
    ----------
    first_ph, second_ph : float
        pH of the buffers at the temperature of use.
    first_mv, second_mv : float
        Readings [mV].
    temperature : float
        [degC]

    Raises
    ------
    ValueError
        When both buffers have the same pH or a number is not finite.
    """
    for name, number in (("First reading", first_mv), ("Second reading", second_mv)):
        if not math.isfinite(number):
            raise ValueError(f"{name} is {number} mV; a finite number is expected.")
    if not math.isfinite(first_ph - second_ph) or first_ph == second_ph:
        raise ValueError(f"pH of the buffers are {first_ph} and {second_ph}; two different numbers are expected.")
    return 100 * (first_mv - second_mv) / (second_ph - first_ph) / nernst_slope(temperature)


def water_ion_product(temperature: float) -> float:
    """pKw of liquid water on the molal scale at 0.1 MPa and a temperature [degC], 0 to 100.

    References
    ----------
    IAPWS R11-07, equations 1 to 3 with n = 6, at the density of water after Tanaka.
    """
    _within(temperature, highest=100.0)
    kelvin, molar_mass = temperature + KELVIN, 18.015268
    density = water_density(temperature) / 1000  # g/cm3
    z = density * math.exp(-0.864671 + 8659.19 / kelvin - 22786.2 / kelvin**2 * density ** (2 / 3))
    liquid = -2 * 6 * (math.log10(1 + z) - z / (z + 1) * density * (0.642044 - 56.8534 / kelvin - 0.375754 * density))
    gas = 0.61415 + 48251.33 / kelvin - 67707.93 / kelvin**2 + 10102100.0 / kelvin**3
    return liquid + gas + 2 * math.log10(molar_mass / 1000)


def _within(temperature: float, *, highest: float) -> None:
    if not 0 <= temperature <= highest:
        raise ValueError(f"Temperature is {temperature} degC; 0 to {highest:g} is expected.")
