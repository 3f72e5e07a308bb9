"""A design file of a two-transistor receiver to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My fast and plain receiver"
revision = "A"
circuit  = "tia-discrete"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[detector]
material                = "InGaAs"
responsivity            = { min = "0.8 A/W", typ = "0.9 A/W", max = "1.0 A/W" }
responsivity_wavelength = "1310 nm"
capacitance             = { typ = "0.5 pF", max = "0.6 pF" }
capacitance_bias        = "3 V"
dark_current            = { typ = "1 nA", max = "10 nA" }
series_resistance       = "15 Ω"
transit_frequency       = "3 GHz"
reverse_voltage_max     = "20 V"
reverse_bias            = "5 V"
output                  = "cathode"     # which end feeds the amplifier: cathode | anode

[transistor]                            # both of them
kind                  = "npn"
current_gain          = { min = "80", typ = "120", max = "200" }
base_emitter_voltage  = { min = "0.72 V", typ = "0.76 V", max = "0.80 V" }
saturation_voltage    = "0.2 V"
transition_frequency  = "9 GHz"
collector_capacitance = "0.12 pF"
base_resistance       = "20 Ω"
current_max           = "20 mA"
voltage_max           = "8 V"
power_max             = "0.2 W"
power_max_at          = "ambient"
junction_to_ambient   = "400 K/W"
junction_max          = "150 °C"

[signal]
wavelength       = "1310 nm"
power            = { typ = "5 µW", max = "100 µW" }  # average optical power on the detector; dBm is read too
bit_rate         = "155 Mbit/s"
extinction_ratio = "9 dB"

[target]
noise_frequency = "10 MHz"

[load]
resistance = "1 kΩ"
coupling   = "ac"

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "5 V", tolerance = "5 %" }
board_capacitance = "0.15 pF"
feedback_stray    = "0.02 pF"

[require]
bandwidth   = { min = "110 MHz" }
peaking     = { max = "1 dB" }
sensitivity = { max = "2 µW" }
overload    = { min = "100 µW" }
"""
