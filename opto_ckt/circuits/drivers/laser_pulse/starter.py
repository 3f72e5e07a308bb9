"""A design file of the pulse driver to begin from; every figure in it is an example."""

STARTER = """\
schema   = 1
title    = "My pulse driver"
revision = "A"
circuit  = "laser-pulse"
# parts  = ["parts.toml"]       # part files; then: part = "NAME" in a table instead of its figures

[source]                                             # the laser; power and slope at `plane`
wavelength                 = "905 nm"
plane                      = "facet"                 # facet | fibre
threshold_current          = { min = "0.4 A", typ = "0.6 A", max = "0.9 A" }
characteristic_temperature = "160 K"                 # T0
slope_efficiency           = { min = "2.6 W/A", typ = "3.0 W/A", max = "3.4 W/A" }
slope_temperature          = "500 K"                 # T1
turn_on_voltage            = { min = "4.6 V", typ = "5.0 V", max = "5.4 V" }
series_resistance          = { min = "0.12 Ω", typ = "0.16 Ω", max = "0.22 Ω" }
inductance                 = { min = "4.8 nH", typ = "5.2 nH", max = "5.8 nH" }   # of its package
capacitance                = "150 pF"
current_max                = "0.5 A"                 # direct current
pulse_current_max          = "40 A"                  # peak, of pulses no longer and no denser than
pulse_width_max            = "100 ns"
duty_max                   = "0.1 %"
power_max                  = "130 W"                 # peak
reverse_voltage_max        = "6 V"
junction_to_case           = "30 K/W"
case_max                   = "85 °C"
common                     = "none"                  # which pins are joined to the case

[transistor]                                         # the switch
kind                     = "nmos"
threshold_voltage        = { min = "1.0 V", typ = "1.4 V", max = "2.0 V" }
transconductance         = "20 A/V"
transconductance_current = "5 A"
on_resistance            = { typ = "40 mΩ", max = "55 mΩ" }
on_resistance_gate       = "5 V"
input_capacitance        = "250 pF"
reverse_capacitance      = "4 pF"
output_capacitance       = "120 pF"
gate_charge              = { typ = "2.0 nC", max = "2.6 nC" }
gate_voltage_max         = "6 V"
inductance               = "0.4 nH"                  # of its package, drain to source
current_max              = "8 A"
pulse_current_max        = "60 A"
voltage_max              = "150 V"
power_max                = "1 W"
power_max_at             = "ambient"
junction_to_ambient      = "80 K/W"
junction_max             = "150 °C"

[logic_output]                                       # the gate driver
high              = { min = "4.75 V", typ = "5.0 V", max = "5.25 V" }
low               = "0 V"
source_resistance = { min = "0.4 Ω", typ = "0.7 Ω", max = "1.1 Ω" }
sink_resistance   = { min = "0.2 Ω", typ = "0.4 Ω", max = "0.7 Ω" }
current_max       = "7 A"

[diode]                                              # across the laser: carries what swings back
forward             = [ { current = "0.1 A", voltage = "0.4 V" }, { current = "10 A", voltage = "1.1 V" } ]
reverse_voltage_max = "40 V"
capacitance         = "60 pF"
pulse_current_max   = "40 A"

[signal]
current         = "25 A"                             # peak; or power = "70 W", peak
pulse_width     = { typ = "12 ns", max = "16 ns" }   # of the current, at half of its peak
repetition_rate = { typ = "2 kHz", max = "2.2 kHz" }

[conditions]
temperature       = { min = "-20 °C", typ = "25 °C", max = "60 °C" }
supply            = { positive = "75 V", tolerance = "3 %" }   # the high voltage
sink_resistance   = "10 K/W"                         # case of the laser to air
layout_inductance = { min = "2.4 nH", typ = "3 nH", max = "3.6 nH" }   # capacitor, tracks, vias
layout_resistance = "20 mΩ"
discharge_time    = "2 s"                            # after power-off, to `safe_voltage` or a tenth of the supply
ageing            = { threshold = "20 %", slope = "-10 %" }

[require]                                            # any figure that the circuit offers, min and/or max
peak_current    = { min = "18 A", max = "34 A" }
peak_power      = { min = "40 W" }
discharge_time  = { max = "2 s" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E96", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0603" }
# capacitors = { series = "E24", tolerance = "5 %", dielectric = "C0G", size = "1206" }

# [fixed]                                            # values you insist on; everything else is sized around them
# C1 = "3.3 nF"
"""
