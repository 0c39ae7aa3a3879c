"""What every size gives, kept so that other limits or costs can be tried on it."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from rheo.line.catalogue import PipeSize
from rheo.line.draw_blocks import Progress, counted, in_blocks
from rheo.line.parts import FloatArray, Line
from rheo.line.product import FlowCurveSource, Product
from rheo.line.size_values import SizeValues, size_values

# Draws worked out in one go: as many as memory bears, fewer where someone watches the progress.
_BLOCK = 2000
_SHOWN_BLOCK = 250


def in_order(sizes: Iterable[PipeSize]) -> tuple[PipeSize, ...]:
    """Return sizes in order of inside diameter."""
    return tuple(sorted(sizes, key=lambda size: (size.inside_diameter, size.name)))


@dataclass(frozen=True, eq=False)
class SizeSurvey:
    """What every size gives; each quantity is worked out when it is first asked for.

    Parameters
    ----------
    line : Line
        All pipes take the size, but those marked as of fixed size.
    product : Product
        With its draws.
    flow : float
        [m3/s].
    sizes : tuple of PipeSize
        In the order in which they are to stand.
    method : str, optional
        Turbulent friction method.
    """

    line: Line
    product: Product
    flow: float
    sizes: tuple[PipeSize, ...]
    method: str | None = None
    _drawn: dict[str, FloatArray] = field(default_factory=dict, repr=False)
    _spread: dict[float, SizeValues] = field(default_factory=dict, repr=False)

    @cached_property
    def central(self) -> SizeValues:
        """By the product's own flow curve, one column."""
        return size_values(self.line, self.product, self.flow, self.sizes, method=self.method)

    def flows(self, share: float) -> FloatArray:
        """Return the flow less a share of it, as it is, and more by that share [m3/s]."""
        return self.flow * np.array([1.0 - share, 1.0, 1.0 + share])

    def spread(self, share: float) -> SizeValues:
        """Return what the sizes give at `flows`, one column a flow."""
        if share not in self._spread:
            self._spread[share] = size_values(
                self.line, self.product, self.flows(share), self.sizes, method=self.method
            )
        return self._spread[share]

    def over_draws(
        self, names: Sequence[str], progress: Progress | None = None
    ) -> dict[str, FloatArray]:
        """Return quantities of `SizeValues` by name, shape (sizes, draws).

        Parameters
        ----------
        names : sequence of str
            Such as ``pressure``.
        progress : callable, optional
            Told the share of the draws that is done [-], from time to time; what it raises ends
            the work.
        """
        missing = [name for name in dict.fromkeys(names) if name not in self._drawn]
        if missing:

            def several(source: FlowCurveSource) -> FloatArray:
                values = size_values(
                    self.line, self.product, self.flow, self.sizes, source, self.method
                )
                return np.stack(np.broadcast_arrays(*(values.of(name) for name in missing)))

            blocks = in_blocks(self.product, _BLOCK if progress is None else _SHOWN_BLOCK)
            found = counted(blocks, several, progress)
            self._drawn.update(zip(missing, found, strict=True))
        return {name: self._drawn[name] for name in names}
