"""The thermal voltage of a junction: V_T = kT/q.

Source: k and q are exact by the definition of the SI of 2019 (BIPM, SI Brochure, 9th edition, table 1).
"""

from __future__ import annotations

from fractions import Fraction

BOLTZMANN = Fraction("1.380649e-23")
ELEMENTARY_CHARGE = Fraction("1.602176634e-19")


def thermal_voltage(kelvin: Fraction) -> Fraction:
    """Give V_T in volts at a temperature, exactly."""
    return BOLTZMANN * kelvin / ELEMENTARY_CHARGE


def temperature_of(volts: Fraction) -> Fraction:
    """Give the temperature in kelvin at which V_T has this value."""
    return volts * ELEMENTARY_CHARGE / BOLTZMANN
