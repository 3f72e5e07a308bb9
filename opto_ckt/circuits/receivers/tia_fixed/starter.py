"""A design file of a receiver around a bought amplifier to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My fast receiver"
revision = "A"
circuit  = "tia-fixed"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[detector]
material                = "InGaAs"
responsivity            = { min = "0.8 A/W", typ = "0.9 A/W", max = "1.0 A/W" }
responsivity_wavelength = "1310 nm"
capacitance             = { typ = "0.5 pF", max = "0.6 pF" }
capacitance_bias        = "3.3 V"
dark_current            = { typ = "1 nA", max = "10 nA" }
series_resistance       = "15 Ω"
transit_frequency       = "3 GHz"
reverse_voltage_max     = "20 V"
reverse_bias            = "3.3 V"
output                  = "anode"       # which end feeds the amplifier: cathode | anode

[fixed_tia]
transimpedance        = { min = "7 kΩ", typ = "9 kΩ", max = "11 kΩ" }
bandwidth             = { min = "120 MHz", typ = "150 MHz" }
input_noise           = { typ = "18 nA", max = "25 nA" }    # rms in its band, or input_noise_density
input_capacitance_max = "1 pF"
overload_current      = { min = "1 mA", typ = "1.3 mA" }
output_resistance     = "60 Ω"
quiescent_current     = "30 mA"
supply_min            = "3.0 V"
supply_max            = "3.6 V"

[signal]
wavelength       = "1310 nm"
power            = { typ = "5 µW", max = "300 µW" }  # average optical power on the detector; dBm is read too
bit_rate         = "155 Mbit/s"
extinction_ratio = "9 dB"
bit_error_ratio  = 1e-10

[target]
noise_frequency = "10 MHz"

[load]
resistance = "1 kΩ"
coupling   = "ac"

[bias]
supply           = "3.3 V"
tolerance        = "5 %"
ripple           = "20 mV"
ripple_frequency = "1 MHz"

[blocks]
bias_filter = { droop = "0.3 V" }
post_filter = { order = 3, cutoff = "105 MHz", response = "flat" }

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "3.3 V", tolerance = "5 %" }
board_capacitance = "0.1 pF"

[require]
bandwidth   = { min = "80 MHz" }
sensitivity = { max = "1.5 µW" }
eye_opening = { min = 0.7 }
overload    = { min = "300 µW" }
"""
