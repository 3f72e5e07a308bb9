"""A design file of the linear LED driver to begin from; every figure in it is an example."""

from __future__ import annotations

STARTER = """\
schema   = 1
title    = "My LED driver"
revision = "A"
circuit  = "led-linear"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[source]                                             # the LED; power at `plane`
wavelength                  = "850 nm"
plane                       = "fibre"                # facet | fibre
forward                     = [                      # voltages at currents: they belong together
    { current = "5 mA", voltage = { min = "1.30 V", typ = "1.40 V", max = "1.52 V" } },
    { current = "20 mA", voltage = { min = "1.40 V", typ = "1.52 V", max = "1.66 V" } },
    { current = "60 mA", voltage = { min = "1.55 V", typ = "1.70 V", max = "1.90 V" } },
]
power                       = [
    { current = "20 mA", power = { min = "8 µW", typ = "12 µW", max = "18 µW" } },
    { current = "60 mA", power = { min = "20 µW", typ = "30 µW", max = "45 µW" } },
]
lifetime                    = { typ = "4 ns", max = "6 ns" }   # or optical_rise_time
capacitance                 = { typ = "60 pF", max = "90 pF" }
current_max                 = "80 mA"
pulse_current_max           = "160 mA"
reverse_voltage_max         = "1.8 V"
power_temperature           = "-0.02 dB/K"
forward_voltage_temperature = "-1.8 mV/K"
junction_to_ambient         = { typ = "260 K/W", max = "320 K/W" }
junction_max                = "110 °C"

[transistor]
kind                     = "nmos"                    # nmos, npn: low side; pmos, pnp: high side
threshold_voltage        = { min = "0.8 V", typ = "1.1 V", max = "1.5 V" }
transconductance         = { min = "0.2 A/V", typ = "0.35 A/V" }
transconductance_current = "0.2 A"
on_resistance            = { typ = "1.2 Ω", max = "2 Ω" }
on_resistance_gate       = "4.5 V"
input_capacitance        = "45 pF"
reverse_capacitance      = "6 pF"
gate_charge              = "0.8 nC"
gate_voltage_max         = "12 V"
current_max              = "0.4 A"
voltage_max              = "30 V"
power_max                = "0.35 W"
power_max_at             = "ambient"
junction_to_ambient      = "350 K/W"
junction_max             = "150 °C"

[amplifier]
gain_bandwidth           = "5 MHz"
second_pole              = "25 MHz"
open_loop_gain           = { min = "90 dB", typ = "105 dB" }
common_capacitance       = "4 pF"
differential_capacitance = "2 pF"
voltage_noise            = "10 nV/√Hz"
voltage_noise_corner     = "1 kHz"
current_noise            = "2 fA/√Hz"
output_resistance        = "120 Ω"
offset_voltage           = { typ = "0.3 mV", max = "1 mV" }
offset_drift             = "2 µV/K"
bias_current             = { typ = "1 pA", max = "20 pA" }
bias_current_doubling    = "10 K"
slew_rate                = "5 V/µs"
swing_to_positive        = { typ = "30 mV", max = "80 mV" }   # from the output's limit to each rail
swing_to_negative        = { typ = "30 mV", max = "80 mV" }
common_mode_to_positive  = "0 V"
common_mode_to_negative  = "0 V"
output_current_max       = "25 mA"
quiescent_current        = { typ = "0.75 mA", max = "1.1 mA" }
supply_min               = "2.7 V"
supply_max               = "5.5 V"
junction_to_ambient      = "200 K/W"
junction_max             = "150 °C"

[reference]                                          # shunt reference
voltage                 = "1.25 V"
tolerance               = "0.2 %"
temperature_coefficient = "50 ppm/K"
noise                   = "120 nV/√Hz"
output_resistance       = "0.4 Ω"
operating_current       = "0.5 mA"

[signal]
current           = "25 mA"                          # standing; or power = "15 µW"
modulation_index  = "50 %"                           # peak over standing current
band              = { min = "20 Hz", max = "100 kHz" }
source_resistance = "600 Ω"                          # of what drives the input

[conditions]
temperature = { min = "-10 °C", typ = "25 °C", max = "60 °C" }
supply      = { positive = "5 V", tolerance = "5 %" }
ageing      = { slope = "-20 %" }                    # of the light over the life

[require]                                            # any figure that the circuit offers, min and/or max
optical_power = { min = "5 µW" }
harmonic_2    = { max = "-25 dB" }
phase_margin  = { min = "50 °" }
peaking       = { max = "0.5 dB" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E24", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0805" }

# [fixed]                                            # values you insist on
# R1 = "12 Ω"
"""
