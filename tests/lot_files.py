"""Files of readings of one made-up product, lot by lot."""

import numpy as np

import rheo

RATE = np.geomspace(0.1, 1000.0, 20)


def write_lot(path, factor=1.0, seed=0, scatter=0.01, temperature=None):
    """Write readings of a Herschel-Bulkley fluid, its stress times a factor."""
    model = rheo.model("herschel-bulkley", yield_stress=12.0, consistency=4.2, flow_index=0.45)
    random = np.random.default_rng(seed)
    stress = factor * model.stress(RATE) * np.exp(scatter * random.standard_normal(RATE.size))
    head, more = "Shear rate [1/s],Shear stress [Pa]", ""
    if temperature is not None:
        head, more = f"{head},Temperature [°C]", f",{temperature}"
    lines = [f"{rate:.6g},{value:.6g}{more}" for rate, value in zip(RATE, stress, strict=True)]
    path.write_text("\n".join([head, *lines, ""]), "utf-8")
