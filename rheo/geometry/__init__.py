"""Places where a fluid is sheared: each links a flow curve with settings and readings.

The package itself can be called: ``rheo.geometry("tube", diameter=0.05, length=2.0)``.
"""

from __future__ import annotations

import sys
from types import ModuleType

from numpy.typing import ArrayLike

from rheo.geometry.dimensioned import Geometry
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.geometry.registry import geometry_record, geometry_records, make_geometry

__all__ = [
    "Dimension",
    "Geometry",
    "GeometryRecord",
    "geometry",
    "geometry_record",
    "geometry_records",
    "make_geometry",
]


class _CallablePackage(ModuleType):
    def __call__(self, key: str, **dimensions: ArrayLike) -> Geometry:
        return make_geometry(key, **dimensions)


geometry = sys.modules[__name__]
geometry.__class__ = _CallablePackage
