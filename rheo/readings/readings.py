"""What an instrument said: columns in SI beside the table as it was read."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError
from rheo.geometry import Geometry, make_geometry
from rheo.geometry.six_speed import STRESS_PER_DEGREE
from rheo.readings import conversion
from rheo.readings.flow_curve import (
    FloatArray,
    FlowCurve,
    branch_column,
    check_below,
    excluded_mask,
    positive_column,
)
from rheo.readings.quantities import BY_KEY, NUMBER_KEYS


@dataclass(frozen=True)
class ColumnRecord:
    """What was understood of one column of a file.

    Parameters
    ----------
    quantity : str
        Key of the quantity; empty for a column that is not used.
    heading : str
        Heading as it stands in the file.
    position : int
        Number of the column, counted from 1.
    unit : str
        Unit in which its numbers were read; empty when it is not used.
    stated : bool
        Whether the file or the user said the unit; otherwise the documented one was taken.
    mapped : bool
        Whether the user chose the column.
    block : str
        Block of the file that the column stands in.
    """

    quantity: str
    heading: str
    position: int
    unit: str = ""
    stated: bool = True
    mapped: bool = False
    block: str = ""


@dataclass(frozen=True)
class RawBlock:
    """One block of a file as it was read: nothing converted, nothing left out.

    Parameters
    ----------
    label : str
        Title of the block, or its number.
    headings : tuple of str
        Headings as they stand in the file.
    units : tuple of str
        The row of units under the headings; empty when there is none.
    rows : tuple of tuple of str or float
        Cells of each row.
    lines : tuple of int
        Line of the file, or row of the sheet, of each row.
    """

    label: str
    headings: tuple[str, ...]
    units: tuple[str, ...]
    rows: tuple[tuple[str | float, ...], ...]
    lines: tuple[int, ...]


@dataclass(frozen=True, eq=False)
class Readings:
    """Readings of an instrument in SI, with the geometry that they were taken in.

    Every column is a 1-D array of n values above 0, or None when absent.

    Parameters
    ----------
    geometry : Geometry, optional
        Where the fluid was sheared. When absent and tube diameters and lengths are there, it is
        a tube with a diameter and a length for every reading.
    angular_speed : array_like, shape (n,), optional
        [rad/s]
    torque : array_like, shape (n,), optional
        [N m]
    torque_fraction : array_like, shape (n,), optional
        Torque as a share of full scale [-]: 0.1 for 10 %.
    dial : array_like, shape (n,), optional
        Dial reading of a six-speed rotor and bob [degree].
    flow : array_like, shape (n,), optional
        [m3/s]
    velocity : array_like, shape (n,), optional
        Mean velocity in a tube [m/s].
    pressure_drop : array_like, shape (n,), optional
        [Pa]
    rate, stress, viscosity : array_like, shape (n,), optional
        Shear rate [1/s], shear stress [Pa] and viscosity [Pa.s] as the instrument gave them.
    tube_diameter, tube_length, gap : array_like, shape (n,), optional
        Dimensions that change from reading to reading [m].
    temperature : array_like, shape (n,), optional
        [K]
    solids_fraction : array_like, shape (n,), optional
        Share of solids [-], by volume or by mass as `solids_basis` says.
    time : array_like, shape (n,), optional
        [s]; may be 0 or negative.
    branch : sequence of str, shape (n,), optional
        ``up``, ``down``, ``hold`` or empty.
    block : sequence of str, shape (n,), optional
        Label of the block of the file.
    excluded : array_like of bool, shape (n,), optional
        Readings that the user has taken out; nothing else ever takes one out.
    full_scale_torque : float, optional
        Torque at 100 % of full scale [N m].
    stress_per_degree : float
        Bob stress at a dial reading of one degree [Pa]; that of the standard spring when absent.
    nominal_form : str, optional
        The geometry's nominal form by which the instrument converts; its first when absent.
    density : float, optional
        [kg/m3], for screening.
    particle_diameter : float, optional
        Largest particle [m], for screening.
    solids_basis : str
        ``volume`` or ``mass``; empty where the readings do not say.
    source : str
        Where the readings come from.
    lines : array_like of int, shape (n,), optional
        Line of the file, or row of the sheet, of each reading.
    columns : tuple of ColumnRecord
        What was understood of the columns.
    table : tuple of RawBlock
        The blocks of the file as read.
    sheets : tuple of str
        Sheets of the file that hold readings, the one that was read first.
    cautions : tuple of Caution
        What the reader wants known.

    Raises
    ------
    InputError
        For columns of unequal length, a value that is not allowed, or no reading at all.
    """

    geometry: Geometry | None = None
    angular_speed: FloatArray | None = None
    torque: FloatArray | None = None
    torque_fraction: FloatArray | None = None
    dial: FloatArray | None = None
    flow: FloatArray | None = None
    velocity: FloatArray | None = None
    pressure_drop: FloatArray | None = None
    rate: FloatArray | None = None
    stress: FloatArray | None = None
    viscosity: FloatArray | None = None
    tube_diameter: FloatArray | None = None
    tube_length: FloatArray | None = None
    gap: FloatArray | None = None
    temperature: FloatArray | None = None
    solids_fraction: FloatArray | None = None
    time: FloatArray | None = None
    branch: NDArray[np.str_] | None = None
    block: NDArray[np.str_] | None = None
    excluded: NDArray[np.bool_] | None = None
    full_scale_torque: float | None = None
    stress_per_degree: float = STRESS_PER_DEGREE
    nominal_form: str | None = None
    density: float | None = None
    particle_diameter: float | None = None
    solids_basis: str = ""
    source: str = ""
    lines: NDArray[np.int64] | None = None
    columns: tuple[ColumnRecord, ...] = ()
    table: tuple[RawBlock, ...] = ()
    sheets: tuple[str, ...] = ()
    cautions: tuple[Caution, ...] = ()

    def __post_init__(self) -> None:
        checked = {key: self._checked(key) for key in (*NUMBER_KEYS, "branch", "block", "lines")}
        sizes = {key: value.size for key, value in checked.items() if value is not None}
        counts = {size for key, size in sizes.items() if key in NUMBER_KEYS}
        if not counts or 0 in counts:
            raise InputError("there is no reading; there must be at least one", self._place)
        if len(set(sizes.values())) > 1:
            listed = ", ".join(f"{key} {size}" for key, size in sizes.items())
            raise InputError(
                f"the columns differ in length: {listed}; they must be equally long", self._place
            )
        count = counts.pop()
        mask = excluded_mask(self.excluded, count)
        checked["excluded"] = np.zeros(count, dtype=bool) if mask is None else mask
        for key, value in checked.items():
            if value is not None:
                value.flags.writeable = False
            object.__setattr__(self, key, value)
        for key in ("full_scale_torque", "stress_per_degree", "density", "particle_diameter"):
            value = getattr(self, key)
            if value is not None and not (np.isfinite(value) and value > 0):
                raise InputError(f"{key} is {value:g}; it must be above 0", self._place)
        if (
            self.geometry is None
            and self.tube_diameter is not None
            and self.tube_length is not None
        ):
            tube = make_geometry("tube", diameter=self.tube_diameter, length=self.tube_length)
            object.__setattr__(self, "geometry", tube)
        elif self.geometry is not None and self.geometry.shape not in {(), (1,), (count,)}:
            raise InputError(
                f"the dimensions of the geometry have shape {self.geometry.shape} for {count} "
                "readings; give one value, or one for each reading",
                self._place,
            )

    @property
    def _place(self) -> str:
        return self.source or "readings"

    def _checked(self, key: str) -> NDArray[np.generic] | None:
        value = getattr(self, key)
        if value is None:
            return None
        if key == "branch":
            return branch_column(value)
        if key == "block":
            return np.array(value, dtype=np.str_)
        if key == "lines":
            return np.array(value, dtype=np.int64)
        quantity = BY_KEY[key]
        what = f"{self._place}, {quantity.name}" if self.source else quantity.name
        if key != "time":
            column = positive_column(value, what, quantity.unit)
            check_below(column, quantity.below, what)
            return column
        time = np.array(value, dtype=float)
        if time.ndim != 1 or not np.isfinite(time).all():
            raise InputError("every time must be a finite number", what)
        return time

    @property
    def left_out(self) -> NDArray[np.bool_]:
        """`excluded` as it is once the readings are made: one entry for each."""
        assert self.excluded is not None
        return self.excluded

    def __len__(self) -> int:
        return int(self.left_out.size)

    @property
    def present(self) -> tuple[str, ...]:
        """Keys of the columns that are there, in the order of the fields."""
        return tuple(
            key for key in (*NUMBER_KEYS, "branch", "block") if getattr(self, key) is not None
        )

    @property
    def setting(self) -> FloatArray:
        """What was set: angular speed [rad/s] or flow [m3/s], shape (n,); needs a geometry.

        Where the file has shear rates only, they are worked back by the geometry's conversion.
        """
        return conversion.measured(self)[0]

    @property
    def reading(self) -> FloatArray:
        """What was read: torque [N m] or pressure drop [Pa], shape (n,); needs a geometry.

        Share of full scale, dial degrees, stress and viscosity are turned into it.
        """
        return conversion.measured(self)[1]

    def flow_curve(self) -> FlowCurve:
        """Return the flow curve by nominal conversion, as if the fluid were Newtonian.

        Without a geometry it is the instrument's own shear rate and stress.

        Raises
        ------
        InputError
            If the columns do not suffice; the sentence says what is missing.
        """
        rate, stress = conversion.converted(self)
        return FlowCurve(
            rate, stress, self.temperature, self.branch, self.excluded, self.solids_fraction
        )

    def with_excluded(self, indices: ArrayLike) -> Readings:
        """Return the readings with just these left out of fits, by the user's word.

        Parameters
        ----------
        indices : array_like of int or of bool
            Indices counted from 0, or a mask; an empty one takes every reading in again.

        Raises
        ------
        InputError
            For an index that no reading has.
        """
        given = np.asarray(indices)
        mask = np.zeros(len(self), dtype=bool)
        if given.dtype == np.bool_:
            if given.shape != mask.shape:
                raise InputError(
                    f"the mask has {given.size} entries for {len(self)} readings", "excluded"
                )
            return dataclasses.replace(self, excluded=given)
        if given.size and (given.dtype.kind not in "iu" or given.min() < 0):
            raise InputError("give whole numbers from 0 on", "excluded")
        if given.size and given.max() >= len(self):
            raise InputError(
                f"there is no reading {int(given.max())}; they are numbered 0 to {len(self) - 1}",
                "excluded",
            )
        mask[given.astype(int)] = True
        return dataclasses.replace(self, excluded=mask)

    def with_geometry(
        self,
        geometry: Geometry | None,
        full_scale_torque: float | None = None,
        nominal_form: str | None = None,
    ) -> Readings:
        """Return the readings with another geometry, and what goes with it.

        Parameters
        ----------
        geometry : Geometry or None
            Where the fluid was sheared.
        full_scale_torque : float, optional
            [N m]; kept as it is when absent.
        nominal_form : str, optional
            The geometry's nominal form by which the instrument converts; its first when absent.
        """
        return dataclasses.replace(
            self,
            geometry=geometry,
            full_scale_torque=full_scale_torque or self.full_scale_torque,
            nominal_form=nominal_form,
        )

    def select(self, mask: ArrayLike) -> Readings:
        """Return some of the readings, by a mask or indices, with the geometry to match."""
        chosen = np.asarray(mask)
        changes = {
            key: getattr(self, key)[chosen]
            for key in (*self.present, "excluded", "lines")
            if getattr(self, key) is not None
        }
        geometry = self.geometry
        if geometry is not None and geometry.shape == (len(self),):
            geometry = geometry.map(
                lambda value: value[chosen] if value.shape == (len(self),) else value
            )
        return dataclasses.replace(self, geometry=geometry, cautions=(), **changes)

    def used(self) -> Readings:
        """Return the readings that the user has not taken out."""
        return self.select(~self.left_out)

    def __repr__(self) -> str:
        held = ", ".join(self.present)
        return f"Readings({len(self)} of {self._place}: {held}; geometry {self.geometry!r})"
