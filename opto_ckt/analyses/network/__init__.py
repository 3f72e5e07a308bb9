"""The linear engine: primitives in, every network function of every lane of values out."""

from opto_ckt.analyses.network.evaluation import Evaluation, Generators
from opto_ckt.analyses.network.network import Network
from opto_ckt.analyses.network.primitives import GROUND, Expansion, NoiseGenerator, Primitive, Value

__all__ = ["GROUND", "Evaluation", "Expansion", "Generators", "Network", "NoiseGenerator", "Primitive", "Value"]
