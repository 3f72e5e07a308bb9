"""A design file of the power-controlled laser driver to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My laser driver"
revision = "A"
circuit  = "laser-power"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[source]                                             # the laser; power and slope at `plane`
wavelength                 = "1310 nm"
plane                      = "fibre"                 # facet | fibre
threshold_current          = { min = "5 mA", typ = "8 mA", max = "11 mA" }
characteristic_temperature = "70 K"                  # T0
slope_efficiency           = { min = "0.04 W/A", typ = "0.06 W/A", max = "0.08 W/A" }
slope_temperature          = "250 K"                 # T1
turn_on_voltage            = { min = "0.85 V", typ = "0.92 V", max = "1.0 V" }
series_resistance          = { min = "3 Ω", typ = "5 Ω", max = "8 Ω" }
capacitance                = "20 pF"
current_max                = "80 mA"
power_max                  = "5 mW"
reverse_voltage_max        = "2 V"
junction_to_case           = "80 K/W"
case_max                   = "85 °C"
common                     = "laser anode with monitor cathode"   # which pins are joined to the case, or "none"
monitor_responsivity       = { min = "0.15 A/W", typ = "0.3 A/W", max = "0.6 A/W" }   # monitor current over power
monitor_capacitance        = { typ = "12 pF", max = "20 pF" }
monitor_dark_current       = { typ = "5 nA", max = "50 nA" }
monitor_reverse_max        = "10 V"
tracking_error             = "0.5 dB"                # from 25 °C to the temperatures below
tracking_error_temperatures = { min = "-20 °C", max = "60 °C" }

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

[diode]                                              # across the laser, against reverse voltage
forward             = [ { current = "1 mA", voltage = "0.28 V" }, { current = "100 mA", voltage = "0.5 V" } ]
reverse_voltage_max = "30 V"
capacitance         = "10 pF"

[signal]
power        = "0.4 mW"                              # average, at the plane; a range is what RV1 reaches over
enable       = true                                  # a logic input switches the laser; open: off
startup_time = "20 ms"                               # to 95 % of the power

[conditions]
temperature     = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply          = { positive = "5 V", tolerance = "5 %" }
sink_resistance = "40 K/W"                           # case of the laser to air
ageing          = { threshold = "20 %" }

[require]                                            # any figure that the circuit offers, min and/or max
optical_power      = { min = "0.33 mW", max = "0.48 mW" }
clamp_margin       = { min = "2 %" }
compliance_margin  = { min = "50 mV" }
phase_margin       = { min = "60 °" }
inner_phase_margin = { min = "45 °" }
startup_time       = { max = "20 ms" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E96", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0603" }
# bypass     = { series = "E6", tolerance = "10 %", dielectric = "X7R", size = "0805" }

# [fixed]                                            # values you insist on; everything else is sized around them
# C4 = "1 nF"
"""
