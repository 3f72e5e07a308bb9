"""A design at its nominal point alone: what it is made of and every value there, corners and findings apart."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Circuit
from opto_ckt.design.model import Model
from opto_ckt.design.reading import ReadDesign
from opto_ckt.design.sizing import choose_values
from opto_ckt.topology import Topology


def nominal(read: ReadDesign, circuit: Circuit) -> tuple[Topology, dict[str, float]]:
    """Topology and every value after bias, fitted parts at their preferred values.

    Raises
    ------
    InfeasibleError : no values exist that bias and stabilise the circuit.
    """
    model = Model(circuit, read.request)
    biased = model.biased({**model.nominal(), **choose_values(model).choice.values})
    return model.topology, {name: float(np.ravel(value)[0]) for name, value in biased.items()}
