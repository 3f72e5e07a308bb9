"""A design file of the LED behind a resistor to begin from; every figure in it is an example."""

from __future__ import annotations

STARTER = """\
schema   = 1
title    = "My LED driver"
revision = "A"
circuit  = "led-resistor"
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

[logic_output]                                       # leave it out for an LED between rail and ground
high              = { min = "4.7 V", typ = "5 V", max = "5.3 V" }   # no load
low               = "0 V"
source_resistance = { min = "12 Ω", typ = "22 Ω", max = "35 Ω" }
sink_resistance   = { min = "8 Ω", typ = "14 Ω", max = "24 Ω" }
current_max       = "50 mA"

[signal]
current = { typ = "25 mA", max = "35 mA" }           # or power = "15 µW"
drive   = "sink"                                     # lit while the output is low: sink, or high: source

[conditions]
temperature = { min = "-10 °C", typ = "25 °C", max = "60 °C" }
supply      = { positive = "5 V", tolerance = "5 %" }
ageing      = { slope = "-20 %" }                    # of the light over the life

[require]                                            # any figure that the circuit offers, min and/or max
optical_power        = { min = "5 µW" }
bandwidth            = { min = "15 MHz" }
junction_temperature = { max = "90 °C" }

# [preferred]                                        # what may be fitted
# resistors  = { series = "E24", tolerance = "1 %", temperature_coefficient = "100 ppm/K", size = "0805" }

# [fixed]                                            # values you insist on
# R1 = "130 Ω"
"""
