"""Heat: junctions, sinks, derating, resistor films."""

from __future__ import annotations

from opto_ckt.formulas.formula import Real, source


@source("thermal Ohm's law")
def junction_temperature(*, reference_temperature: Real, power: Real, thermal_resistance: Real) -> Real:
    r"""Temperature of a junction or a resistor film above that of air or case.

    .. math:: T_j = T_r + P R_{th}

    Parameters
    ----------
    reference_temperature : T_r of the place where R_th ends. [K]
    power : P, light that leaves taken off. [W]
    thermal_resistance : R_th from junction or film to that place, the sum of all in a row. [K/W]

    Returns
    -------
    T_j. [K]

    Notes
    -----
    Steady state.

    Examples
    --------
    >>> t = junction_temperature(reference_temperature=323.15, power=1.0, thermal_resistance=62.5)
    >>> print(f"{t - 273.15:.1f} °C")
    112.5 °C
    """
    return reference_temperature + power * thermal_resistance


@source("thermal Ohm's law")
def allowed_thermal_resistance(*, junction_limit: Real, reference_temperature: Real, power: Real) -> Real:
    r"""Largest thermal resistance, junction to reference, that a heat allows.

    .. math:: R_{th} = (T_{max} - T_r)/P

    Parameters
    ----------
    junction_limit : T_max. [K]
    reference_temperature : T_r of air or case. [K]
    power : P. [W]

    Returns
    -------
    R_th. [K/W]

    Notes
    -----
    Steady state.

    Examples
    --------
    >>> r = allowed_thermal_resistance(junction_limit=398.15, reference_temperature=333.15, power=1.8)
    >>> print(f"{r:.2f} K/W")
    36.11 K/W
    """
    return (junction_limit - reference_temperature) / power


@source("thermal Ohm's law; J. M. Jacob, Power Electronics, Ex. 4.6")
def sink_resistance(
    *,
    junction_limit: Real,
    ambient_temperature: Real,
    power: Real,
    junction_to_case: Real,
    case_to_sink: Real,
) -> Real:
    r"""Thermal resistance, sink to air, that a heat sink must not exceed.

    .. math:: R_{sa} = \frac{T_{max} - T_a}{P} - R_{jc} - R_{cs}

    Parameters
    ----------
    junction_limit : T_max. [K]
    ambient_temperature : T_a. [K]
    power : P. [W]
    junction_to_case : R_jc. [K/W]
    case_to_sink : R_cs of the joint. [K/W]

    Returns
    -------
    R_sa. [K/W]

    Notes
    -----
    All heat through the sink; a negative result: no sink will do.

    Examples
    --------
    >>> r = sink_resistance(
    ...     junction_limit=398.15, ambient_temperature=313.15, power=2.92, junction_to_case=2.5, case_to_sink=2.0)
    >>> print(f"{r:.2f} K/W")
    24.61 K/W
    """
    return (junction_limit - ambient_temperature) / power - junction_to_case - case_to_sink


@source("A. S. Sedra & K. C. Smith, Microelectronic Circuits, Ex. 14.4")
def thermal_resistance(*, junction_limit: Real, rated_temperature: Real, rated_power: Real) -> Real:
    r"""Thermal resistance that a power rating implies.

    .. math:: R_{th} = (T_{max} - T_0)/P_0

    Parameters
    ----------
    junction_limit : T_max. [K]
    rated_temperature : T_0 up to which the rating holds. [K]
    rated_power : P_0. [W]

    Returns
    -------
    R_th to the place where T_0 is measured. [K/W]

    Notes
    -----
    The rating is set by T_max alone.
    """
    return (junction_limit - rated_temperature) / rated_power


@source("thermal Ohm's law; A. S. Sedra & K. C. Smith, Microelectronic Circuits, Ex. 14.4")
def allowed_power(*, junction_limit: Real, reference_temperature: Real, thermal_resistance: Real) -> Real:
    r"""Heat that a temperature of air or case allows.

    .. math:: P = (T_{max} - T_r)/R_{th}

    Parameters
    ----------
    junction_limit : T_max. [K]
    reference_temperature : T_r of air or case. [K]
    thermal_resistance : R_th from junction to that place. [K/W]

    Returns
    -------
    P. [W]

    Notes
    -----
    Up to the rating of the part only.
    """
    return (junction_limit - reference_temperature) / thermal_resistance


@source("data sheets: straight line from full power to none; film resistors 70 °C to 155 °C")
def derated_power(*, rated_power: Real, temperature: Real, knee: Real, zero: Real) -> Real:
    r"""Power rating on the falling part of a derating curve.

    .. math:: P = P_0 \frac{T_0 - T}{T_0 - T_k}

    Parameters
    ----------
    rated_power : P_0 up to T_k. [W]
    temperature : T, between T_k and T_0. [K]
    knee : T_k. [K]
    zero : T_0, where nothing is left. [K]

    Returns
    -------
    P. [W]

    Notes
    -----
    Below T_k it is P_0, above T_0 nothing; precision thin film reaches its limit earlier, take T_0 from its sheet.
    """
    return rated_power * (zero - temperature) / (zero - knee)


@source("derived: package to air beside case, joint and sink")
def parallel_path(
    *, junction_to_ambient: Real, junction_to_case: Real, case_to_sink: Real, sink_to_ambient: Real
) -> Real:
    r"""Thermal resistance of a part on a sink that also cools through its package.

    .. math:: \frac1R = \frac1{R_{ja}} + \frac1{R_{jc} + R_{cs} + R_{sa}}

    Parameters
    ----------
    junction_to_ambient : R_ja without a sink. [K/W]
    junction_to_case : R_jc. [K/W]
    case_to_sink : R_cs. [K/W]
    sink_to_ambient : R_sa. [K/W]

    Returns
    -------
    R. [K/W]

    Notes
    -----
    R_ja is as if the case were in the open: on the hopeful side.
    """
    return 1 / (1 / junction_to_ambient + 1 / (junction_to_case + case_to_sink + sink_to_ambient))


@source("derived: `parallel_path` solved for the sink; Kolimbiris, Fiber Optics Communications, Ex. 6.3")
def sink_resistance_with_parallel_path(
    *, allowed: Real, junction_to_ambient: Real, junction_to_case: Real, case_to_sink: Real
) -> Real:
    r"""Thermal resistance, sink to air, of a part that also cools through its package.

    .. math:: R_{sa} = \frac{1}{1/R - 1/R_{ja}} - R_{jc} - R_{cs}

    Parameters
    ----------
    allowed : R in all, below R_ja. [K/W]
    junction_to_ambient : R_ja without a sink. [K/W]
    junction_to_case : R_jc. [K/W]
    case_to_sink : R_cs. [K/W]

    Returns
    -------
    R_sa. [K/W]

    Notes
    -----
    R ≥ R_ja needs no sink.

    Examples
    --------
    >>> r = sink_resistance_with_parallel_path(
    ...     allowed=17.7, junction_to_ambient=33.0, junction_to_case=3.0, case_to_sink=0.65)
    >>> print(f"{r:.2f} K/W")
    34.53 K/W
    """
    return 1 / (1 / allowed - 1 / junction_to_ambient) - junction_to_case - case_to_sink
