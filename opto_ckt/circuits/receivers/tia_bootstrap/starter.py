"""A design file of the bootstrapped transimpedance amplifier to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My receiver"
revision = "A"
circuit  = "tia-bootstrap"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[detector]
material                = "Si"
responsivity            = { min = "0.5 A/W", typ = "0.55 A/W", max = "0.6 A/W" }
responsivity_wavelength = "850 nm"
capacitance             = { typ = "300 pF", max = "340 pF" }
capacitance_bias        = "5 V"
dark_current            = { typ = "2 nA", max = "15 nA" }
shunt_resistance        = "200 MΩ"
series_resistance       = "8 Ω"
reverse_voltage_max     = "30 V"
reverse_bias            = "5 V"
output                  = "cathode"     # which end feeds the amplifier: cathode | anode

[follower]                              # the JFET that drives the other end
kind                    = "njf"         # njf | pjf
saturation_current      = { min = "20 mA", typ = "30 mA", max = "45 mA" }
pinch_off_voltage       = { min = "1.2 V", typ = "1.8 V", max = "2.5 V" }
gate_source_capacitance = "16 pF"
gate_drain_capacitance  = "6 pF"
voltage_noise           = "0.9 nV/√Hz"
gate_current            = { typ = "10 pA", max = "100 pA" }
current_max             = "50 mA"
voltage_max             = "25 V"
power_max               = "0.3 W"
power_max_at            = "ambient"
junction_to_ambient     = "400 K/W"
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
wavelength       = "850 nm"
power            = { typ = "0.3 µW", max = "10 µW" } # average optical power on the detector; dBm is read too
ambient          = "1 µA"                            # steady background as photocurrent, or { power, wavelength }
bit_rate         = "2 Mbit/s"                        # or, analog: band = { min = "1 kHz", max = "1 MHz" }
extinction_ratio = "10 dB"

[target]
response        = "flat"                             # flat | bessel | critical
noise_frequency = "500 kHz"
noise_band      = { min = "1 kHz", max = "2 MHz" }

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "5 V", negative = "-5 V", tolerance = "5 %" }
# input_level     = "2.5 V"                          # of the + input, for a single supply (negative = "0 V")
board_capacitance = "0.5 pF"                         # summing node to ground
feedback_stray    = "0.05 pF"                        # across R1, besides the resistor's own body

[require]                                            # any figure that the circuit offers, min and/or max
bandwidth    = { min = "1.4 MHz" }
peaking      = { max = "0.5 dB" }
output_swing = { max = "2 V" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E96", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0603" }
# capacitors = { series = "E24", tolerance = "5 %", tolerance_below_10pF = "0.1 pF", dielectric = "C0G", size = "0603" }

# [fixed]                                            # values you insist on; everything else is sized around them
# R1 = "22 kΩ"
"""
