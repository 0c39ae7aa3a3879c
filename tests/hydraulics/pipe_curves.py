"""Random flow curves of every model, for the property tests."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

import rheo


def _log(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(np.log(low), np.log(high)).map(lambda value: float(np.exp(value)))


INDEX = st.floats(0.1, 2.0)
THINNING = st.floats(0.1, 1.0)
YIELD = st.one_of(st.just(0.0), _log(1e-3, 500.0))
SIZE = _log(1e-3, 100.0)
PLATEAU = _log(1e-2, 1e3)
SHARE = st.one_of(st.just(0.0), _log(1e-6, 1.0))
TIME = _log(1e-3, 1e3)


def _plateau(key: str, **others: st.SearchStrategy[float]) -> st.SearchStrategy[rheo.Model]:
    def build(**values: float) -> rheo.Model:
        low = values["zero_shear_viscosity"] * values.pop("share")
        return rheo.model(key, infinite_shear_viscosity=low, **values)

    return st.builds(build, zero_shear_viscosity=PLATEAU, share=SHARE, time_constant=TIME, **others)


def _plain(key: str, **parameters: st.SearchStrategy[float]) -> st.SearchStrategy[rheo.Model]:
    return st.builds(lambda **values: rheo.model(key, **values), **parameters)


CURVES = {
    "newtonian": _plain("newtonian", viscosity=SIZE),
    "power-law": _plain("power-law", consistency=SIZE, flow_index=INDEX),
    "bingham": _plain("bingham", yield_stress=YIELD, plastic_viscosity=SIZE),
    "herschel-bulkley": _plain(
        "herschel-bulkley", yield_stress=YIELD, consistency=SIZE, flow_index=INDEX
    ),
    "casson": _plain("casson", yield_stress=YIELD, casson_viscosity=SIZE),
    "carreau": _plateau("carreau", flow_index=THINNING),
    "carreau-yasuda": _plateau(
        "carreau-yasuda", flow_index=THINNING, yasuda_exponent=_log(0.3, 8.0)
    ),
    "cross": _plateau("cross", rate_index=st.floats(0.0, 0.9)),
    "sisko": _plain("sisko", infinite_shear_viscosity=SIZE, consistency=SIZE, flow_index=INDEX),
    "robertson-stiff": _plain(
        "robertson-stiff", consistency=SIZE, rate_offset=_log(1e-2, 100.0), flow_index=INDEX
    ),
    "ellis": _plain(
        "ellis",
        zero_shear_viscosity=PLATEAU,
        half_stress=_log(0.1, 1e3),
        stress_index=st.floats(1.0, 10.0),
    ),
}
DIAMETER = _log(0.005, 1.0)
VELOCITY = _log(1e-4, 15.0)
DENSITY = st.floats(700.0, 2000.0)
RELATIVE_ROUGHNESS = st.one_of(st.just(0.0), _log(1e-6, 0.05))
