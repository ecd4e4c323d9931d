"""Equilibrium constants at another temperature than 25 degC."""

from __future__ import annotations

from collections.abc import Iterable
from math import log, log10

from gossan.constants.entries import Component, Gas, Mineral, Species, TemperatureFit

GAS_CONSTANT = 8.314462618  # J/(mol K), exact since the SI of 2019
REFERENCE = 298.15  # K, the temperature of every log10_k
KELVIN = 273.15  # K at 0 degC, exact
WITH_ENTHALPY = (KELVIN, KELVIN + 50.0)  # K: what a constant with an enthalpy or a fit is trusted for
NEAR_REFERENCE = (REFERENCE - 10.0, REFERENCE + 10.0)  # K: what one without either is trusted for


def log10_k_at(entry: Component | Species | Mineral | Gas, temperature_k: float) -> float:
    """log10 of an entry's constant, of forming from or dissolving to components (equations.md, 2).

    temperature_k  K, > 0
    Returns  1; by the temperature fit if there is one, else by van 't Hoff's law with the enthalpy at
             25 degC, else the value at 25 degC. For a held component: its half reaction.
    Raises   ValueError for a component that is the first ion of its element
    Valid    as the entry's `valid` says; with an enthalpy alone the heat capacity is taken as nil, which
             costs up to a few hundredths at 0 and 50 degC
    """
    if isinstance(entry, Component):
        constant, enthalpy, fit = entry.half_log10_k, entry.half_enthalpy, entry.half_fit
    else:
        constant, enthalpy, fit = entry.log10_k, entry.enthalpy, entry.fit
    if fit is None:
        if constant is None:
            raise ValueError(f"{entry.name} is the first ion of its element: it forms from nothing else")
        fit = van_t_hoff(constant.value, enthalpy.value if enthalpy else 0.0)
    return evaluated(fit, temperature_k)


def evaluated(fit: TemperatureFit, temperature_k: float) -> float:
    """Value of a fit at a temperature in K."""
    t = temperature_k
    return (
        fit.constant + fit.linear * t + fit.inverse / t + fit.log10 * log10(t) + fit.inverse_square / (t * t)
    )


def enthalpy_of(fit: TemperatureFit, temperature_k: float = REFERENCE) -> float:
    """Reaction enthalpy in J/mol that a fit stands for at a temperature in K: its slope (equations.md, 2).

    >>> round(enthalpy_of(van_t_hoff(-10.0, 50e3)), 6)
    50000.0
    """
    t = temperature_k
    slope = fit.linear * t * t - fit.inverse + fit.log10 * t / log(10.0) - 2.0 * fit.inverse_square / t
    return GAS_CONSTANT * log(10.0) * slope


def van_t_hoff(log10_k: float, enthalpy: float) -> TemperatureFit:
    """Fit that passes log10_k at 25 degC with a constant reaction enthalpy in J/mol (van 't Hoff).

    >>> round(evaluated(van_t_hoff(-10.0, 50e3), 273.15), 4)
    -10.8017
    """
    slope = enthalpy / (GAS_CONSTANT * log(10.0))
    return TemperatureFit(constant=log10_k + slope / REFERENCE, inverse=-slope)


def combined(parts: Iterable[tuple[float, TemperatureFit]]) -> TemperatureFit:
    """Fit of a sum of reactions, each taken so many times: exactly the sum of their values at every T."""
    constant = linear = inverse = logarithm = inverse_square = 0.0
    for times, fit in parts:
        constant += times * fit.constant
        linear += times * fit.linear
        inverse += times * fit.inverse
        logarithm += times * fit.log10
        inverse_square += times * fit.inverse_square
    return TemperatureFit(constant, linear, inverse, logarithm, inverse_square)
