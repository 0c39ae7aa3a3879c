"""Draws in blocks: for progress on the way, and so that memory does not grow with their number."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from rheo.line.parts import FloatArray
from rheo.line.product import FlowCurveSource, Product
from rheo.models import Model
from rheo.models.state_curve import ScaledCurve

# After each block: the share of the work that is done [-]. What it raises ends the work.
Progress = Callable[[float], None]


def in_blocks(product: Product, most: int) -> Product:
    """Return the product with its draws in entries of at most `most` each, in the same order.

    Parameters
    ----------
    product : Product
        With draws.
    most : int
        Above 0.

    Returns
    -------
    Product
        `over_draws` gives the same for it.
    """
    blocks: list[FlowCurveSource] = []
    for source, size in zip(product.draws, product.draw_sizes, strict=True):
        blocks += [_part(source, start, min(start + most, size)) for start in range(0, size, most)]
    return replace(product, draws=tuple(blocks))


def _part(source: FlowCurveSource, start: int, end: int) -> FlowCurveSource:
    def cut(value: FloatArray) -> FloatArray:
        return value[..., start:end] if value.ndim and value.shape[-1] > 1 else value

    if isinstance(source, Model | ScaledCurve):
        return source.map(cut)
    by_temperature = source
    return lambda temperature: by_temperature(temperature).map(cut)


def counted(
    product: Product, calculate: Callable[[FlowCurveSource], FloatArray], progress: Progress | None
) -> FloatArray:
    """Return ``product.over_draws(calculate)``, telling how far it is after each entry.

    Parameters
    ----------
    product : Product
        With draws, `in_blocks`.
    calculate : callable
        As for `Product.over_draws`.
    progress : callable, optional
        Told the share that is done [-].
    """
    done = 0

    def one(source: FlowCurveSource) -> FloatArray:
        nonlocal done
        found = calculate(source)
        done += 1
        if progress is not None:
            progress(done / len(product.draws))
        return found

    return product.over_draws(one)
