"""A design file of the cascode transimpedance amplifier to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My receiver"
revision = "A"
circuit  = "tia-cascode"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[detector]
material                = "Si"
responsivity            = { min = "0.38 A/W", typ = "0.42 A/W", max = "0.46 A/W" }
responsivity_wavelength = "650 nm"
capacitance             = { typ = "45 pF", max = "55 pF" }
capacitance_bias        = "5 V"
dark_current            = { typ = "0.5 nA", max = "4 nA" }
shunt_resistance        = "500 MΩ"
series_resistance       = "15 Ω"
reverse_voltage_max     = "30 V"
reverse_bias            = "5 V"
output                  = "cathode"     # which end feeds the transistor: cathode | anode

[transistor]                            # in common base: npn behind a cathode, pnp behind an anode
kind                    = "npn"
current_gain            = { min = "200", typ = "330", max = "450" }
base_emitter_voltage    = { min = "0.55 V", typ = "0.62 V", max = "0.70 V" }
saturation_voltage      = { typ = "0.1 V", max = "0.25 V" }
transition_frequency    = { min = "80 MHz", typ = "120 MHz" }
collector_capacitance   = "3 pF"
base_resistance         = "60 Ω"
current_max             = "100 mA"
voltage_max             = "45 V"
power_max               = "0.25 W"
power_max_at            = "ambient"
junction_to_ambient     = "500 K/W"
junction_max            = "150 °C"

[amplifier]
gain_bandwidth           = "400 MHz"
second_pole              = "700 MHz"
open_loop_gain           = "80 dB"
common_capacitance       = "1.5 pF"
differential_capacitance = "0.7 pF"
voltage_noise            = "6 nV/√Hz"
voltage_noise_corner     = "2 kHz"
current_noise            = "2 fA/√Hz"
output_resistance        = "40 Ω"
offset_voltage           = { typ = "0.3 mV", max = "2 mV" }
bias_current             = { typ = "3 pA", max = "20 pA" }
bias_current_doubling    = "10 K"
slew_rate                = "260 V/µs"
swing_to_positive        = "1.3 V"      # from the output's limit to each rail
swing_to_negative        = "1.3 V"
output_current_max       = "40 mA"
quiescent_current        = "12 mA"
supply_min               = "4.5 V"
supply_max               = "12.6 V"
junction_to_ambient      = "150 K/W"
junction_max             = "150 °C"

[signal]
wavelength       = "650 nm"
power            = { typ = "0.5 µW", max = "20 µW" } # average optical power on the detector; dBm is read too
ambient          = "0.2 µA"                          # steady background as photocurrent, or { power, wavelength }
bit_rate         = "4 Mbit/s"                        # or, analog: band = { min = "1 kHz", max = "2 MHz" }
extinction_ratio = "10 dB"

[target]
response        = "flat"                             # flat | bessel | critical
noise_frequency = "1 MHz"
noise_band      = { min = "1 kHz", max = "4 MHz" }

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "5 V", negative = "-5 V", tolerance = "5 %" }
# input_level     = "2.5 V"                          # of base and + input, for a single supply (negative = "0 V")
board_capacitance = "0.5 pF"                         # emitter to ground, and summing node to ground
feedback_stray    = "0.05 pF"                        # across R1, besides the resistor's own body

[require]                                            # any figure that the circuit offers, min and/or max
bandwidth    = { min = "2.8 MHz" }
peaking      = { max = "0.5 dB" }
output_swing = { max = "2 V" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E96", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0603" }
# capacitors = { series = "E24", tolerance = "5 %", tolerance_below_10pF = "0.1 pF", dielectric = "C0G", size = "0603" }

# [fixed]                                            # values you insist on; everything else is sized around them
# R1 = "22 kΩ"
"""
