"""A design file of the transimpedance amplifier with a tee to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My faint light receiver"
revision = "A"
circuit  = "tia-tee"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[detector]
material                = "InGaAs"
responsivity            = { min = "0.8 A/W", typ = "0.9 A/W", max = "1.0 A/W" }
responsivity_wavelength = "1310 nm"
capacitance             = { typ = "9 pF", max = "11 pF" }
capacitance_bias        = "5 V"
dark_current            = { typ = "5 pA", max = "20 pA" }
shunt_resistance        = "10 GΩ"
series_resistance       = "10 Ω"
reverse_voltage_max     = "20 V"
reverse_bias            = "5 V"
output                  = "cathode"     # which end feeds the amplifier: cathode | anode

[amplifier]
gain_bandwidth           = "8 MHz"
open_loop_gain           = "110 dB"
common_capacitance       = "5 pF"
differential_capacitance = "2 pF"
voltage_noise            = "9 nV/√Hz"
voltage_noise_corner     = "50 Hz"
current_noise            = "0.6 fA/√Hz"
output_resistance        = "100 Ω"
offset_voltage           = { typ = "20 µV", max = "100 µV" }
bias_current             = { typ = "0.3 pA", max = "2 pA" }
bias_current_doubling    = "10 K"
slew_rate                = "10 V/µs"
swing_to_positive        = "0.1 V"      # from the output's limit to each rail
swing_to_negative        = "0.1 V"
output_current_max       = "20 mA"
quiescent_current        = "1.5 mA"
supply_min               = "4 V"
supply_max               = "12 V"
junction_to_ambient      = "150 K/W"
junction_max             = "150 °C"

[signal]
wavelength       = "1310 nm"
power            = { typ = "2 nW", max = "20 nW" }   # average optical power on the detector; dBm is read too
ambient          = "1 nA"                            # steady background as photocurrent, or { power, wavelength }
band             = { max = "10 kHz" }

[target]
response        = "flat"                             # flat | bessel | critical
noise_frequency = "1 kHz"
noise_band      = { min = "10 Hz", max = "50 kHz" }
tee             = "resistive"                        # resistive | capacitive | both

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "5 V", negative = "-5 V", tolerance = "5 %" }
# input_level     = "2.5 V"                          # of the + input, for a single supply (negative = "0 V")
board_capacitance = "0.3 pF"                         # summing node to ground
feedback_stray    = "0.05 pF"                        # across R1, besides the resistor's own body

[require]                                            # any figure that the circuit offers, min and/or max
bandwidth    = { min = "10 kHz" }
peaking      = { max = "0.5 dB" }
output_swing = { max = "2 V" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E96", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0603" }
# capacitors = { series = "E24", tolerance = "5 %", tolerance_below_10pF = "0.1 pF", dielectric = "C0G", size = "0603" }

# [fixed]                                            # values you insist on; everything else is sized around them
# R1 = "10 MΩ"
"""
