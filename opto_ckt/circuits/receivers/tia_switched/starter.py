"""A design file of the switched receiver to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My switched receiver"
revision = "A"
circuit  = "tia-switched"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures
gain_ranges = [ { power = "20 µW" }, { power = "300 µW" } ]    # largest average light of each, faintest first

[detector]
material                = "InGaAs"
responsivity            = { min = "0.8 A/W", typ = "0.9 A/W", max = "1.0 A/W" }
responsivity_wavelength = "1310 nm"
capacitance             = { typ = "9 pF", max = "11 pF" }
capacitance_bias        = "5 V"
dark_current            = { typ = "0.5 nA", max = "3 nA" }
shunt_resistance        = "100 MΩ"
series_resistance       = "10 Ω"
reverse_voltage_max     = "20 V"
reverse_bias            = "5 V"
output                  = "cathode"     # which end feeds the amplifier: cathode | anode

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

[analog_switch]                         # each contact
on_resistance        = "5 Ω"
off_capacitance      = { typ = "0.05 pF", max = "0.08 pF" }
terminal_capacitance = "2 pF"
leakage              = { typ = "10 pA", max = "100 pA" }
voltage_max          = "6 V"
current_max          = "30 mA"

[signal]
wavelength       = "1310 nm"
power            = { typ = "2 µW", max = "300 µW" }  # average optical power on the detector; dBm is read too
ambient          = "1 µA"                            # steady background as photocurrent, or { power, wavelength }
bit_rate         = "10 Mbit/s"                       # or, analog: band = { min = "1 kHz", max = "5 MHz" }
extinction_ratio = "9 dB"

[target]
response        = "flat"                             # flat | bessel | critical
noise_frequency = "1 MHz"
noise_band      = { min = "1 kHz", max = "10 MHz" }

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "5 V", negative = "-5 V", tolerance = "5 %" }
# input_level     = "2.5 V"                          # of the + input, for a single supply (negative = "0 V")
board_capacitance = "0.3 pF"                         # summing node to ground
feedback_stray    = "0.05 pF"                        # across R1, besides the resistor's own body

[require]                                            # any figure that the circuit offers, min and/or max
bandwidth    = { min = "8 MHz" }
peaking      = { max = "0.5 dB" }
output_swing = { max = "2 V" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E96", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0603" }
# capacitors = { series = "E24", tolerance = "5 %", tolerance_below_10pF = "0.1 pF", dielectric = "C0G", size = "0603" }

# [fixed]                                            # values you insist on; everything else is sized around them
# R1 = "22 kΩ"
"""
