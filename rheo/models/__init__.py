"""Flow curves: shear stress as a function of shear rate, one file a model."""

from rheo.models.record import Model, ModelRecord, Parameter, Separable
from rheo.models.registry import model, model_record, model_records

__all__ = [
    "Model",
    "ModelRecord",
    "Parameter",
    "Separable",
    "model",
    "model_record",
    "model_records",
]
