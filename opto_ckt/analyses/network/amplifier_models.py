"""Small-signal models of op amps, comparators, bought transimpedance amplifiers and transistors."""

from __future__ import annotations

from dataclasses import replace
from math import pi

from opto_ckt.analyses.network.element_model import Parts, model_of, named, one, own, shot, thermal
from opto_ckt.analyses.network.primitives import NoiseGenerator, Primitive
from opto_ckt.constants import BOLTZMANN
from opto_ckt.topology import GROUND, BipolarTransistor, Comparator, FixedTia, OpAmp, Transistor


@model_of.register
def _(element: OpAmp) -> Parts:
    """Two poles of unit-gain stages, an output resistance, input capacitances; e_n sits ahead of the first stage."""
    ref = element.ref
    first, second, ideal = f"{ref}.pole1", f"{ref}.pole2", f"{ref}.ideal"
    gain_bandwidth = named(f"{ref}.gain_bandwidth")
    open_loop_gain = named(f"{ref}.open_loop_gain")
    second_pole = named(f"{ref}.second_pole")
    voltage_noise = named(f"{ref}.voltage_noise")
    current_noise = named(f"{ref}.current_noise")
    return (
        (
            own("C", element, "differential_capacitance", (element.plus, element.minus)),
            Primitive("C", f"{ref}.common_plus", (element.plus, GROUND), named(f"{ref}.common_capacitance")),
            Primitive("C", f"{ref}.common_minus", (element.minus, GROUND), named(f"{ref}.common_capacitance")),
            Primitive("G", f"{ref}.stage1", (GROUND, first, element.plus, element.minus), one),
            Primitive("R", f"{ref}.gain", (first, GROUND), open_loop_gain),
            Primitive("C", f"{ref}.dominant", (first, GROUND), lambda v: 1 / (2 * pi * gain_bandwidth(v))),
            Primitive("G", f"{ref}.stage2", (GROUND, second, first, GROUND), one),
            Primitive("R", f"{ref}.unity", (second, GROUND), one),
            Primitive("C", f"{ref}.second", (second, GROUND), lambda v: 1 / (2 * pi * second_pole(v))),
            Primitive("E", f"{ref}.buffer", (ideal, GROUND, second, GROUND), one),
            Primitive("R", f"{ref}.output", (ideal, element.out), named(f"{ref}.output_resistance")),
        ),
        (
            NoiseGenerator(
                f"{ref} voltage",
                (GROUND, first),
                lambda v: voltage_noise(v) ** 2,
                named(f"{ref}.voltage_noise_corner"),
            ),
            NoiseGenerator(
                f"{ref} current",
                (GROUND, element.minus),
                lambda v: current_noise(v) ** 2,
                named(f"{ref}.current_noise_corner"),
            ),
            NoiseGenerator(
                f"{ref} current, + input",
                (GROUND, element.plus),
                lambda v: current_noise(v) ** 2,
                named(f"{ref}.current_noise_corner"),
            ),
        ),
    )


@model_of.register
def _(element: Comparator) -> Parts:
    """Input capacitances; the output rests at a level, behind its resistance."""
    ref = element.ref
    common = named(f"{ref}.common_capacitance")
    return (
        (
            own("C", element, "differential_capacitance", (element.plus, element.minus)),
            Primitive("C", f"{ref}.common_plus", (element.plus, GROUND), common),
            Primitive("C", f"{ref}.common_minus", (element.minus, GROUND), common),
            own("R", element, "output_resistance", (element.out, GROUND)),
        ),
        (),
    )


@model_of.register
def _(element: FixedTia) -> Parts:
    """A sensed current, two poles with Q = 1/√2, where it does not pass DC a high-pass, gain, output resistance."""
    ref = element.ref
    sensed, driven, turned, low = (f"{ref}.{name}" for name in ("sensed", "driven", "turned", "low"))
    last, ideal = low if element.passes_dc else f"{ref}.high", f"{ref}.ideal"
    resistance, bandwidth = named(f"{ref}.input_resistance"), named(f"{ref}.bandwidth")
    transimpedance, noise = named(f"{ref}.transimpedance"), named(f"{ref}.input_noise_density")
    primitives = [
        own("R", element, "input_resistance", (element.input, GROUND)),
        Primitive("G", f"{ref}.sense", (GROUND, sensed, element.input, GROUND), lambda v: 1 / resistance(v)),
        Primitive("R", f"{ref}.unity", (sensed, GROUND), one),
        Primitive("E", f"{ref}.drive", (driven, GROUND, sensed, GROUND), one),
        Primitive("R", f"{ref}.damping", (driven, turned), lambda v: 2**0.5),
        Primitive("L", f"{ref}.turn", (turned, low), lambda v: 1 / (2 * pi * bandwidth(v))),
        Primitive("C", f"{ref}.hold", (low, GROUND), lambda v: 1 / (2 * pi * bandwidth(v))),
        Primitive("E", f"{ref}.buffer", (ideal, GROUND, GROUND, last), transimpedance),
        own("R", element, "output_resistance", (ideal, element.out)),
    ]
    if not element.passes_dc:
        cutoff, copied = named(f"{ref}.low_cutoff"), f"{ref}.copied"
        primitives += [
            Primitive("E", f"{ref}.copy", (copied, GROUND, low, GROUND), one),
            Primitive("C", f"{ref}.block", (copied, last), lambda v: 1 / (2 * pi * cutoff(v))),
            Primitive("R", f"{ref}.return", (last, GROUND), one),
        ]
    input_noise = NoiseGenerator(f"{ref} input", (GROUND, element.input), lambda v: noise(v) ** 2, None)
    return tuple(primitives), (input_noise,)


@model_of.register
def _(element: Transistor) -> Parts:
    """Transconductance with input conductance, output conductance and two capacitances.

    Channel noise is 4 k T γ g_m (γ = 2/3, long channel); a bipolar transistor's collector shot noise 2 q I_C
    is the same with γ = 1/2. Base current brings its own shot noise.
    """
    ref, control, source, drain = element.ref, element.control, element.source, element.drain
    transconductance = named(f"{ref}.transconductance")
    input_conductance = named(f"{ref}.input_conductance")
    output_conductance = named(f"{ref}.output_conductance")
    noise_factor = named(f"{ref}.channel_noise_factor")
    temperature = named("temperature")
    return (
        (
            Primitive("G", f"{ref}.channel", (drain, source, control, source), transconductance),
            Primitive("G", f"{ref}.input", (control, source, control, source), input_conductance),
            Primitive("G", f"{ref}.leak", (drain, source, drain, source), output_conductance),
            Primitive("C", f"{ref}.control_source", (control, source), named(f"{ref}.control_source_capacitance")),
            Primitive("C", f"{ref}.control_drain", (control, drain), named(f"{ref}.control_drain_capacitance")),
        ),
        (
            NoiseGenerator(
                f"{ref} channel",
                (drain, source),
                lambda v: 4 * BOLTZMANN * temperature(v) * noise_factor(v) * transconductance(v),
                None,
            ),
            shot(f"{ref} control", (control, source), named(f"{ref}.control_current")),
        ),
    )


@model_of.register
def _(element: BipolarTransistor) -> Parts:
    """As any transistor, behind the resistance of the base."""
    inner, figure = f"{element.ref}.base", "base_resistance"
    ends = (element.control, inner)
    primitives, generators = model_of.dispatch(Transistor)(replace(element, control=inner))
    return (
        (own("R", element, figure, ends), *primitives),
        (thermal(f"{element.ref} base", ends, named(element.value_name(figure))), *generators),
    )
