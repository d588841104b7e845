"""
Compiled core of ridemodes.
"""

import collections.abc
import typing
import numpy
import numpy.typing
import pandas
import xarray
from collections.abc import Iterator
from numpy import bool_, complex128, float64, str_
from numpy.typing import NDArray
from os import PathLike
from typing import Any, Final, SupportsFloat, SupportsIndex, final

__all__ = ["CAUTION", "VERSION", "ClosedOff", "Decoupling", "Element", "Fault", "FrequencyResponse", "Limit", "LinearSystem", "Modes", "Motions", "OperatingPoint", "Parameter", "Payload", "Readings", "Sensitivities", "SlowLine", "StateSpace", "Sweep", "Table", "Vehicle", "WheelRates", "example", "examples", "load", "loads", "schema"]

CAUTION: Final[str]
"""
What every result has to be read with.
"""

VERSION: Final[str]
"""
Version of the compiled core.
"""

@final
class ClosedOff:
    """
    Oil on one side of a line that is shut.
    """
    def __copy__(self, /) -> ClosedOff: ...
    def __deepcopy__(self, /, _memo: Any) -> ClosedOff: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> ClosedOff: ...
    @property
    def accumulators(self, /) -> list[str]:
        """
        Its accumulators.
        """
    @property
    def compliance(self, /) -> float:
        """
        Compliance of all that it holds [m^3/Pa].
        """
    @property
    def lines(self, /) -> list[str]:
        """
        Lines whose closing bounds it.
        """
    @property
    def nodes(self, /) -> list[str]:
        """
        Its nodes.
        """
    @property
    def pressure(self, /) -> float:
        """
        Absolute pressure [Pa].
        """

@final
class Decoupling:
    """
    What each number could do, alone, to decouple two motions in stiffness; the smallest change first.
    """
    def __copy__(self, /) -> Decoupling: ...
    def __deepcopy__(self, /, _memo: Any) -> Decoupling: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Decoupling: ...
    @property
    def cross(self, /) -> float:
        """
        Coupling of the vehicle as it is [1].
        """
    @property
    def least(self, /) -> NDArray[float64]:
        """
        Coupling that each number reaches: zero at a solution, else the least it can [1].
        """
    @property
    def least_at(self, /) -> NDArray[float64]:
        """
        Values at which that is met, in SI.
        """
    @property
    def motions(self, /) -> tuple[str, str]:
        """
        The two motions.
        """
    @property
    def paths(self, /) -> list[str]:
        """
        Paths of the numbers that move the coupling.
        """
    @property
    def solutions(self, /) -> NDArray[float64]:
        """
        Values that decouple, in SI; NaN where none within the range does.
        """
    def table(self, /) -> Table:
        """
        What each number could do, as a table.

        Returns
        -------
        Table
        """
    @property
    def units(self, /) -> list[str]:
        """
        Units of the numbers.
        """
    @property
    def values(self, /) -> NDArray[float64]:
        """
        Values of the numbers as they are, in SI.
        """

@final
class Element:
    """
    A named element: it adds ``mass``, ``damping`` and ``stiffness`` times ``outer(row, row)`` to the matrices.
    """
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Element: ...
    @property
    def damping(self, /) -> float:
        """
        Damping or resistance.
        """
    @property
    def kind(self, /) -> str:
        """
        What it is, e.g. ``spring`` or ``gas``.
        """
    @property
    def mass(self, /) -> float:
        """
        Mass or inertance.
        """
    @property
    def name(self, /) -> str:
        """
        Name, e.g. ``front_left.spring``.
        """
    @property
    def road(self, /) -> str | None:
        """
        Wheel whose road height moves its other end.
        """
    @property
    def row(self, /) -> NDArray[float64]:
        """
        Row over the coordinates.
        """
    @property
    def stiffness(self, /) -> float:
        """
        Stiffness; of a store of volume its share of one over the node's compliance.
        """

@final
class Fault:
    """
    Something that has failed: it changes the data a state is solved from.
    """
    def __copy__(self, /) -> Fault: ...
    def __deepcopy__(self, /, _memo: Any) -> Fault: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Fault: ...
    @staticmethod
    def air(fraction: SupportsFloat | SupportsIndex) -> Fault:
        """
        Entrained air in the oil.

        Parameters
        ----------
        fraction : float
            Volume of air per volume of oil at atmospheric pressure.

        Returns
        -------
        Fault
        """
    @staticmethod
    def burst(circuit: str) -> Fault:
        """
        A burst line: the circuit's oil is at the pressure of the air.

        Parameters
        ----------
        circuit : str
            Name of the circuit.

        Returns
        -------
        Fault
        """
    @staticmethod
    def closed(way: str) -> Fault:
        """
        A way that is shut: a port, an accumulator's, or a line.

        Parameters
        ----------
        way : str
            Its path, e.g. ``circuits.left.chambers.front_left_bump``.

        Returns
        -------
        Fault
        """
    @staticmethod
    def lost_precharge(accumulator: str) -> Fault:
        """
        An accumulator without its charge: oil fills it, and nothing gives.

        Parameters
        ----------
        accumulator : str
            Its path, e.g. ``circuits.left.accumulators.main``.

        Returns
        -------
        Fault
        """
    @property
    def name(self, /) -> str:
        """
        The fault in words.
        """
    @staticmethod
    def years(years: SupportsFloat | SupportsIndex) -> Fault:
        """
        Years of service without a check of the charge, at each accumulator's ``yearly_loss``.

        Parameters
        ----------
        years : float
            Years.

        Returns
        -------
        Fault
        """

@final
class FrequencyResponse:
    """
    Responses of outputs to inputs, outputs x inputs x frequencies, for motions e^(j 2 pi f t).
    """
    def __copy__(self, /) -> FrequencyResponse: ...
    def __deepcopy__(self, /, _memo: Any) -> FrequencyResponse: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> FrequencyResponse: ...
    @property
    def frequency(self, /) -> NDArray[float64]:
        """
        Frequencies [Hz].
        """
    def in_motions(self, /) -> FrequencyResponse:
        """
        The same with the road in heave, pitch, roll and warp in place of the four wheels.

        Returns
        -------
        FrequencyResponse
        """
    @property
    def input_units(self, /) -> list[str]:
        """
        Units of the inputs.
        """
    @property
    def inputs(self, /) -> list[str]:
        """
        Names of the inputs.
        """
    @property
    def output_units(self, /) -> list[str]:
        """
        Units of the outputs.
        """
    @property
    def outputs(self, /) -> list[str]:
        """
        Names of the outputs.
        """
    @property
    def response(self, /) -> NDArray[complex128]:
        """
        Complex responses, outputs x inputs x frequencies.
        """
    def table(self, /) -> Table:
        """
        Largest gain of each output to each road input, and where it is, as a table.

        Returns
        -------
        Table
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The responses as an `xarray.Dataset`.

        Returns
        -------
        xarray.Dataset
        """

@final
class Limit:
    """
    A limit with the margin to it.
    """
    def __copy__(self, /) -> Limit: ...
    def __deepcopy__(self, /, _memo: Any) -> Limit: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Limit: ...
    @property
    def limit(self, /) -> float:
        """
        Where the limit is.
        """
    @property
    def margin(self, /) -> float:
        """
        How far the state is from it; negative once it is passed.
        """
    @property
    def name(self, /) -> str:
        """
        What it limits, e.g. ``front_left.lift_off``.
        """
    @property
    def passed(self, /) -> bool:
        """
        Whether the state is beyond it.
        """
    @property
    def unit(self, /) -> str:
        """
        Unit of both.
        """
    @property
    def value(self, /) -> float:
        """
        Where the state stands.
        """

@final
class LinearSystem:
    """
    Mass, damping and stiffness over the coordinates, at an operating point.

    Coordinates are deviations: body z [m], pitch and roll [rad], four wheels [m], then volumes moved through
    lines [m^3] and inner coordinates, by name.
    """
    def __copy__(self, /) -> LinearSystem: ...
    def __deepcopy__(self, /, _memo: Any) -> LinearSystem: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> LinearSystem: ...
    @property
    def coordinate_units(self, /) -> list[str]:
        """
        Units of the coordinates.
        """
    @property
    def coordinates(self, /) -> list[str]:
        """
        Names of the coordinates.
        """
    @property
    def coupling(self, /) -> NDArray[float64]:
        """
        Quasi-static coupling of the oil at the wheels, 4 x 4 [N/m]: force against bump per bump.
        """
    def coupling_table(self, /) -> Table:
        """
        The coupling of the oil as a table.

        Returns
        -------
        Table
        """
    @property
    def damping(self, /) -> NDArray[float64]:
        """
        Damping matrix, n x n.
        """
    @property
    def deflection(self, /) -> NDArray[float64]:
        """
        Suspension deflections over the coordinates, 4 x n, bump positive.
        """
    def dynamic_coupling(self, /, frequency: "numpy.typing.ArrayLike") -> "numpy.typing.NDArray[numpy.complex128]":
        """
        Dynamic coupling of the oil at the wheels.

        Parameters
        ----------
        frequency : float or array_like
            Frequencies [Hz]; 0 gives `coupling`.

        Returns
        -------
        numpy.ndarray
            Complex, 4 x 4 x frequencies [N/m]: stiffness as real part, damping times angular frequency as
            imaginary part.

        Raises
        ------
        Singular
            At an undamped resonance of the oil.
        """
    @property
    def elements(self, /) -> list[Element]:
        """
        The elements that the matrices are made of, the body's mass apart.
        """
    def frequency_response(self, /, frequency: "numpy.typing.ArrayLike | None" = None) -> "FrequencyResponse":
        """
        Response to the road under each wheel, to force and moments on the body and to volume put into the nodes.

        Outputs are body accelerations, accelerations of the seats, deflections, changes of tyre load (compression
        positive), pressures of the nodes and flows of the lines. Every equation is solved as it stands at each frequency.

        Parameters
        ----------
        frequency : float or array_like, optional
            Frequencies [Hz]; left out, a grid from 0.05 to 50 Hz that lies closer about every pole.

        Returns
        -------
        FrequencyResponse

        Raises
        ------
        Singular
            At an undamped resonance.
        """
    @property
    def mass(self, /) -> NDArray[float64]:
        """
        Mass matrix, n x n.
        """
    def modes(self, /, *, damped: bool = True, locked: bool = False) -> Modes:
        """
        The modes.

        Parameters
        ----------
        damped : bool
            With all damping and every state; otherwise without damping, the oil flowing freely.
        locked : bool
            Without damping: with no flow in any line.

        Returns
        -------
        Modes

        Raises
        ------
        Singular
            Where a motion is free; the error names it.
        """
    def motions(self, /) -> Motions:
        """
        Stiffness and damping in heave, pitch, roll and warp.

        Returns
        -------
        Motions

        Raises
        ------
        Singular
            Where nothing holds the body.
        """
    @property
    def point(self, /) -> OperatingPoint:
        """
        The operating point it is taken at.
        """
    @property
    def road_damping(self, /) -> NDArray[float64]:
        """
        Force on the coordinates per road velocity under each wheel, n x 4.
        """
    @property
    def road_stiffness(self, /) -> NDArray[float64]:
        """
        Force on the coordinates per road height under each wheel, n x 4.
        """
    def sensitivities(self, /) -> Sensitivities:
        """
        Derivatives of modes, motions and coupling with respect to every number of the vehicle, all at once.

        Returns
        -------
        Sensitivities

        Raises
        ------
        Singular
            Where a motion is free.
        """
    def state_space(self, /) -> StateSpace:
        """
        The system as state space, for `scipy.signal` or python-control.

        Returns
        -------
        StateSpace
            Unpacks to ``A, B, C, D``.
        """
    @property
    def stiffness(self, /) -> NDArray[float64]:
        """
        Stiffness matrix, n x n.
        """
    def table(self, /) -> Table:
        """
        Coordinates and coupling as a table.

        Returns
        -------
        Table
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The matrices as an `xarray.Dataset`.

        Returns
        -------
        xarray.Dataset
        """

@final
class Modes:
    """
    Modes of a linear system, one row for each pole in the closed upper half-plane, by ascending frequency.
    """
    def __copy__(self, /) -> Modes: ...
    def __deepcopy__(self, /, _memo: Any) -> Modes: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __len__(self, /) -> int: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Modes: ...
    @property
    def assumptions(self, /) -> list[str]:
        """
        What is taken for granted, e.g. that a slow line is shut.
        """
    @property
    def coordinates(self, /) -> list[str]:
        """
        Names of the coordinates, the columns of `shape`.
        """
    @property
    def damping_ratio(self, /) -> NDArray[float64]:
        """
        Damping ratios [1].
        """
    @property
    def dissipation_share(self, /) -> NDArray[float64]:
        """
        Shares of dissipation, modes x elements; zero without damping.
        """
    @property
    def elements(self, /) -> list[str]:
        """
        Names of the elements, the columns of `strain_share` and `dissipation_share`.
        """
    def energy_table(self, /, row: "int | str") -> "Table":
        """
        Where a mode's strain energy and dissipation are, as a table, the largest first.

        Parameters
        ----------
        row : int or str
            Row, or label (of an overdamped motion its slower pole).

        Returns
        -------
        Table

        Raises
        ------
        IndexError
            For a row that is not there.
        KeyError
            For a label that is not there.
        """
    @property
    def frequency(self, /) -> NDArray[float64]:
        """
        Natural frequencies, the pole's magnitude over 2 pi [Hz].
        """
    @property
    def kind(self, /) -> str:
        """
        In words, whether the modes are damped and what the oil does.
        """
    @property
    def label(self, /) -> NDArray[str_]:
        """
        Labels: seven mechanical motions, ``oil 1`` and so on, ``relaxation 1`` and so on.

        A pair of poles gone real carries its label twice.
        """
    @property
    def motion_share(self, /) -> NDArray[float64]:
        """
        Shares of kinetic energy in heave, pitch, roll, warp and the oil, modes x 5; rows sum to 1.
        """
    @property
    def motion_share_names(self, /) -> list[str]:
        """
        Names of the columns of `motion_share`.
        """
    @property
    def pole(self, /) -> NDArray[complex128]:
        """
        Poles [rad/s].
        """
    @property
    def positions(self, /) -> NDArray[float64]:
        """
        Positions of the corners from the centre of gravity, x forward and y left, 2 x 4 [m].
        """
    def rows(self, /, label: str) -> list[int]:
        """
        Rows that carry a label, ascending in frequency.

        Parameters
        ----------
        label : str
            E.g. ``body roll``.

        Returns
        -------
        list of int
            One row, two of an overdamped motion, none for an unknown label.
        """
    @property
    def shape(self, /) -> NDArray[complex128]:
        """
        Shapes, modes x coordinates; the component of most kinetic energy is 1.
        """
    @property
    def share(self, /) -> NDArray[float64]:
        """
        Shares of kinetic energy, modes x 8 in the order of `share_names`; rows sum to 1.
        """
    @property
    def share_names(self, /) -> list[str]:
        """
        Names of the columns of `share`.
        """
    @property
    def strain_share(self, /) -> NDArray[float64]:
        """
        Shares of strain energy, modes x elements.
        """
    def table(self, /) -> Table:
        """
        The modes as a table for people: the seven mechanical ones first, then oil, then relaxation.

        Returns
        -------
        Table
        """
    def to_dataframe(self, /) -> "pandas.DataFrame":
        """
        Frequencies, damping and shares as a `pandas.DataFrame`.

        Returns
        -------
        pandas.DataFrame
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The modes as an `xarray.Dataset` with units.

        Returns
        -------
        xarray.Dataset
        """
    @property
    def unclear(self, /) -> NDArray[bool_]:
        """
        Whether the label is a near tie with another mode's.
        """

@final
class Motions:
    """
    The suspension in heave, pitch, roll and warp, at vanishing frequency.

    Matrices are 4 x 4 in the order of `names`; of the corners in the order front left, front right, rear
    left, rear right.
    """
    def __copy__(self, /) -> Motions: ...
    def __deepcopy__(self, /, _memo: Any) -> Motions: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Motions: ...
    @property
    def assumptions(self, /) -> list[str]:
        """
        What is taken for granted, e.g. that a slow line is shut.
        """
    @property
    def at_ground(self, /) -> NDArray[float64]:
        """
        Stiffness at the ground with the body free and tyres in series, 4 x 4 [N/m].
        """
    @property
    def at_wheels(self, /) -> NDArray[float64]:
        """
        Stiffness of the suspension at the wheels, 4 x 4 [N/m]; column i is what raising wheel i meets.
        """
    @property
    def bounce_centre(self, /) -> float:
        """
        Where the body turns in its bounce mode, ahead of the centre of gravity [m]; infinite for pure bounce.
        """
    @property
    def damping(self, /) -> NDArray[float64]:
        """
        Damping of dampers and oil together, 4 x 4 [N*s/m].
        """
    @property
    def damping_at_wheels(self, /) -> NDArray[float64]:
        """
        Damping of the suspension at the wheels, 4 x 4 [N*s/m].
        """
    @property
    def damping_conventional(self, /) -> NDArray[float64]:
        """
        Damping of the dampers, 4 x 4 [N*s/m].
        """
    @property
    def damping_cross(self, /) -> NDArray[float64]:
        """
        Off-diagonals of the damping over the root of the diagonals, 4 x 4 [1]; diagonal zero.
        """
    @property
    def damping_oil(self, /) -> NDArray[float64]:
        """
        Damping of throttles and lines, 4 x 4 [N*s/m].
        """
    @property
    def element_damping(self, /) -> NDArray[float64]:
        """
        Damping each element adds to the motions, elements x 4 [N*s/m].
        """
    @property
    def element_stiffness(self, /) -> NDArray[float64]:
        """
        Stiffness each element adds to the motions, elements x 4 [N/m].
        """
    @property
    def elements(self, /) -> list[str]:
        """
        Names of the elements that hold or damp a motion.
        """
    @property
    def names(self, /) -> list[str]:
        """
        Names of the motions: heave, pitch, roll, warp.
        """
    @property
    def pitch_centre(self, /) -> float:
        """
        Where the body turns in its pitch mode, ahead of the centre of gravity [m].
        """
    @property
    def ride_frequency(self, /) -> tuple[float, float]:
        """
        Undamped frequency of front and rear on their axles alone, tyres in series [Hz].
        """
    @property
    def roll_stiffness(self, /) -> NDArray[float64]:
        """
        Moment per angle of body roll at the front axle, the rear axle and in total [N*m/rad].
        """
    @property
    def roll_stiffness_conventional(self, /) -> NDArray[float64]:
        """
        The conventional part of `roll_stiffness` [N*m/rad].
        """
    @property
    def roll_stiffness_oil(self, /) -> NDArray[float64]:
        """
        The oil's part of `roll_stiffness` [N*m/rad].
        """
    @property
    def stiffness(self, /) -> NDArray[float64]:
        """
        Stiffness of conventional part and oil together, 4 x 4 [N/m].
        """
    @property
    def stiffness_conventional(self, /) -> NDArray[float64]:
        """
        Stiffness of springs and bars, 4 x 4 [N/m].
        """
    @property
    def stiffness_cross(self, /) -> NDArray[float64]:
        """
        Off-diagonals of the stiffness over the root of the diagonals, 4 x 4 [1]; diagonal zero.
        """
    @property
    def stiffness_oil(self, /) -> NDArray[float64]:
        """
        Stiffness of oil and gas, 4 x 4 [N/m].
        """
    def table(self, /) -> Table:
        """
        Everything as a table, for people.

        Returns
        -------
        Table
        """
    def to_dataframe(self, /) -> "pandas.DataFrame":
        """
        Stiffness and damping of each motion as a `pandas.DataFrame`.

        Returns
        -------
        pandas.DataFrame
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The matrices as an `xarray.Dataset` with units.

        Returns
        -------
        xarray.Dataset
        """
    @property
    def warnings(self, /) -> list[str]:
        """
        Couplings above 5 %.
        """
    @property
    def warp_free_ground(self, /) -> float:
        """
        Warp stiffness with the body free to follow, at the ground, tyres in series [N/m].
        """
    @property
    def warp_free_wheels(self, /) -> float:
        """
        Warp stiffness with the body free to follow, at the wheels [N/m].
        """
    @property
    def warp_to_roll(self, /) -> float:
        """
        Warp over roll stiffness [1].
        """

@final
class OperatingPoint:
    """
    Where and under which loads the vehicle stands.

    Corners come in the order front left, front right, rear left, rear right; circuits by name.
    """
    def __copy__(self, /) -> OperatingPoint: ...
    def __deepcopy__(self, /, _memo: Any) -> OperatingPoint: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> OperatingPoint: ...
    @property
    def atmosphere(self, /) -> float:
        """
        Absolute pressure of the air around [Pa].
        """
    @property
    def attitude(self, /) -> NDArray[float64]:
        """
        Heave z [m], pitch [rad] and roll [rad] from the design condition.
        """
    @property
    def cavity(self, /) -> NDArray[float64]:
        """
        Volume of the cavity in each circuit where oil has torn off [m^3].
        """
    @property
    def circuits(self, /) -> list[str]:
        """
        Names of the circuits.
        """
    @property
    def closed_off(self, /) -> list[ClosedOff]:
        """
        What lines that are shut have closed off.
        """
    @property
    def corner_load(self, /) -> NDArray[float64]:
        """
        Sprung corner loads [N].
        """
    @property
    def cross_weight(self, /) -> float:
        """
        Cross weight of the tyre loads, (FR + RL) over all.
        """
    @property
    def deflection(self, /) -> NDArray[float64]:
        """
        Suspension deflections from the design condition, bump positive [m].
        """
    @property
    def friction(self, /) -> NDArray[float64]:
        """
        Dry friction of damper and cylinder at each wheel, plus or minus [N].
        """
    @property
    def front_transfer(self, /) -> float:
        """
        Front share of the lateral load transfer; NaN without any.
        """
    @property
    def gas_volume(self, /) -> NDArray[float64]:
        """
        Gas volume of each circuit [m^3].
        """
    @property
    def limits(self, /) -> dict[str, Limit]:
        """
        Margins to what limits the suspension, by name.
        """
    def linear(self, /, gravity: bool = False) -> LinearSystem:
        """
        The linear system about this operating point.

        Parameters
        ----------
        gravity : bool
            Whether the moment of the leaned body's weight is taken in, with roll about the roll axis; off, these are
            the classical seven degrees of freedom.

        Returns
        -------
        LinearSystem

        Raises
        ------
        Singular
            Where incompressible oil has nowhere to go.
        """
    @property
    def oil_added(self, /) -> NDArray[float64]:
        """
        Oil volume added to each circuit since the design condition [m^3].
        """
    @property
    def oil_load(self, /) -> NDArray[float64]:
        """
        Share of the corner loads that the oil carries, at the wheel [N].
        """
    @property
    def passed(self, /) -> list[Limit]:
        """
        Limits that are passed.
        """
    @property
    def piston_travel(self, /) -> NDArray[float64]:
        """
        Travel of the pistons from mid-stroke, bump positive [m]; NaN without a cylinder.
        """
    @property
    def pressure(self, /) -> NDArray[float64]:
        """
        Absolute pressure of each circuit [Pa].
        """
    @property
    def slow_lines(self, /) -> list[SlowLine]:
        """
        Lines that only balance slowly.
        """
    @property
    def spring_load(self, /) -> NDArray[float64]:
        """
        Share of the corner loads that the springs carry, at the wheel [N].
        """
    @property
    def spring_preload(self, /) -> NDArray[float64]:
        """
        Forces in the springs themselves [N].
        """
    @property
    def stop_load(self, /) -> NDArray[float64]:
        """
        Share of the corner loads that the stops carry, at the wheel [N].
        """
    def table(self, /) -> Table:
        """
        Corner loads and circuits as a table.

        Returns
        -------
        Table
        """
    @property
    def temperature(self, /) -> float:
        """
        Temperature of gas and oil [K].
        """
    def to_dataframe(self, /) -> "pandas.DataFrame":
        """
        The corners as a `pandas.DataFrame`.

        Returns
        -------
        pandas.DataFrame
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The corners and circuits as an `xarray.Dataset` with units.

        Returns
        -------
        xarray.Dataset
        """
    @property
    def tyre_load(self, /) -> NDArray[float64]:
        """
        Vertical tyre loads [N].
        """
    @property
    def vehicle(self, /) -> Vehicle:
        """
        The vehicle that stands there.
        """
    @property
    def warnings(self, /) -> list[str]:
        """
        What the engineer should know, e.g. a spring that would have to pull.
        """
    @property
    def wheels(self, /) -> NDArray[float64]:
        """
        Heights of the wheels from the design condition [m].
        """

@final
class Parameter:
    """
    A number of a vehicle, as `Vehicle.parameters` lists it.
    """
    def __eq__(self, value: object, /) -> bool: ...
    def __ne__(self, value: object, /) -> bool: ...
    def __new__(cls, /, path: str, value: SupportsFloat | SupportsIndex, unit: str, meaning: str, bounds: tuple[SupportsFloat | SupportsIndex, SupportsFloat | SupportsIndex]) -> Parameter: ...
    def __reduce__(self, /) -> "tuple[type[Parameter], tuple[object, ...]]": ...
    def __repr__(self, /) -> str: ...
    @property
    def bounds(self, /) -> tuple[float, float]:
        """
        Least and largest value.
        """
    @property
    def meaning(self, /) -> str:
        """
        What it means.
        """
    @property
    def path(self, /) -> str:
        """
        Path, e.g. ``front.both.spring.rate``.
        """
    @property
    def unit(self, /) -> str:
        """
        SI unit, ``1`` if none.
        """
    @property
    def value(self, /) -> float:
        """
        Value in SI.
        """

@final
class Payload:
    """
    A point mass carried by the body.

    Parameters
    ----------
    mass : float
        Mass [kg].
    x : float
        Ahead of the body's centre of gravity [m].
    y : float
        To the left of it [m].
    z : float
        Above it [m].
    """
    def __copy__(self, /) -> Payload: ...
    def __deepcopy__(self, /, _memo: Any) -> Payload: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __new__(cls, /, mass: SupportsFloat | SupportsIndex, x: SupportsFloat | SupportsIndex = 0.0, y: SupportsFloat | SupportsIndex = 0.0, z: SupportsFloat | SupportsIndex = 0.0) -> Payload: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Payload: ...
    @property
    def mass(self, /) -> float:
        """
        Mass [kg].
        """
    @property
    def x(self, /) -> float:
        """
        Ahead of the body's centre of gravity [m].
        """
    @property
    def y(self, /) -> float:
        """
        To the left of the body's centre of gravity [m].
        """
    @property
    def z(self, /) -> float:
        """
        Above the body's centre of gravity [m].
        """

@final
class Readings:
    """
    What a chassis engineer reads off a state.
    """
    def __copy__(self, /) -> Readings: ...
    def __deepcopy__(self, /, _memo: Any) -> Readings: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Readings: ...
    @property
    def braking_gradient(self, /) -> float:
        """
        Pitch per deceleration in braking, nose down positive [rad per m/s^2].
        """
    @property
    def circuits(self, /) -> list[str]:
        """
        Names of the circuits.
        """
    @property
    def cross_weight(self, /) -> float:
        """
        Cross weight of the tyre loads, (FR + RL) over all.
        """
    @property
    def driving_gradient(self, /) -> float:
        """
        Pitch per acceleration in drive, nose up positive [rad per m/s^2].
        """
    @property
    def fast(self, /) -> bool:
        """
        Whether the changes are fast.
        """
    @property
    def front_transfer(self, /) -> float:
        """
        Front share of the lateral load transfer.
        """
    @property
    def lateral_at_lift(self, /) -> float:
        """
        Lateral acceleration at which the first wheel lifts [m/s^2].
        """
    @property
    def lift_in_corner(self, /) -> float:
        """
        Lift of the body at 5 m/s^2 of lateral acceleration [m].
        """
    @property
    def load_per_height(self, /) -> NDArray[float64]:
        """
        Change of tyre loads (rows) per height under each wheel (columns), 4 x 4 [N/m].
        """
    @property
    def load_per_twist(self, /) -> NDArray[float64]:
        """
        Change of each tyre load per ground twist [N/m].
        """
    @property
    def mass(self, /) -> float:
        """
        All that the tyres carry, as a mass [kg].
        """
    @property
    def pressure_per_braking(self, /) -> NDArray[float64]:
        """
        Change of each pressure per deceleration in braking [Pa per m/s^2].
        """
    @property
    def pressure_per_lateral(self, /) -> NDArray[float64]:
        """
        Change of each pressure per lateral acceleration [Pa per m/s^2].
        """
    @property
    def ride_frequency(self, /) -> NDArray[float64]:
        """
        Undamped frequency of the front and the rear sprung mass alone [Hz].
        """
    @property
    def roll_gradient(self, /) -> float:
        """
        Roll per lateral acceleration [rad per m/s^2].
        """
    @property
    def slope_at_lift(self, /) -> float:
        """
        Slope across at which the first wheel lifts [rad].
        """
    def table(self, /) -> Table:
        """
        The readings as a table.

        Returns
        -------
        Table
        """
    @property
    def twist_at_lift(self, /) -> float:
        """
        Ground twist h (times 1, -1, -1, 1) at which the first wheel lifts [m].
        """

@final
class Sensitivities:
    """
    Derivatives of damped modes, four-motion tables and coupling with respect to every number of the vehicle.

    The last axis follows `paths`. A number whose change would alter the coordinates (a throttle of zero) is
    `excluded`, and a mode whose pole equals another's is `repeated`: their entries are NaN.
    """
    def __copy__(self, /) -> Sensitivities: ...
    def __deepcopy__(self, /, _memo: Any) -> Sensitivities: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Sensitivities: ...
    @property
    def coupling(self, /) -> NDArray[float64]:
        """
        Derivatives of the coupling of the oil at the wheels, 4 x 4 x paths [N/m per unit].
        """
    @property
    def damping(self, /) -> NDArray[float64]:
        """
        Derivatives of the damping in the four motions, 4 x 4 x paths [N*s/m per unit].
        """
    @property
    def damping_ratio(self, /) -> NDArray[float64]:
        """
        Derivatives of the damping ratios, modes x paths [1 per unit of the number].
        """
    @property
    def excluded(self, /) -> list[str]:
        """
        Paths of numbers without a derivative.
        """
    @property
    def frequency(self, /) -> NDArray[float64]:
        """
        Derivatives of the frequencies, modes x paths [Hz per unit of the number].
        """
    @property
    def modes(self, /) -> Modes:
        """
        The damped modes that are differentiated; their rows are those of the derivatives.
        """
    def motion_table(self, /) -> Table:
        """
        What moves stiffness and damping of the four motions, as a table, the largest effect first.

        Returns
        -------
        Table
        """
    @property
    def paths(self, /) -> list[str]:
        """
        Paths of the numbers.
        """
    @property
    def relative_damping_ratio(self, /) -> NDArray[float64]:
        """
        Per cent of damping ratio per per cent of the number, modes x paths.
        """
    @property
    def relative_frequency(self, /) -> NDArray[float64]:
        """
        Per cent of frequency per per cent of the number, modes x paths.
        """
    @property
    def repeated(self, /) -> NDArray[bool_]:
        """
        Whether a mode's pole equals another's: only the sum of equal poles has a gradient.
        """
    @property
    def stiffness(self, /) -> NDArray[float64]:
        """
        Derivatives of the stiffness in the four motions, 4 x 4 x paths [N/m per unit].
        """
    def table(self, /, label: str) -> Table:
        """
        What moves a mode, as a table, the largest effect first.

        Parameters
        ----------
        label : str
            Label of the mode, e.g. ``body roll``.

        Returns
        -------
        Table

        Raises
        ------
        KeyError
            For a label that is not there.
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The derivatives as an `xarray.Dataset`.

        Returns
        -------
        xarray.Dataset
        """
    @property
    def units(self, /) -> list[str]:
        """
        Units of the numbers.
        """
    @property
    def values(self, /) -> NDArray[float64]:
        """
        Values of the numbers, in SI.
        """

@final
class SlowLine:
    """
    A slow line between two parts of the oil.
    """
    def __copy__(self, /) -> SlowLine: ...
    def __deepcopy__(self, /, _memo: Any) -> SlowLine: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> SlowLine: ...
    @property
    def name(self, /) -> str:
        """
        Path of the line, e.g. ``lines.balance``.
        """
    @property
    def resistance(self, /) -> float:
        """
        Its resistance [Pa*s/m^3].
        """
    @property
    def time_constant(self, /) -> float:
        """
        Time in which a difference of pressure falls to 1/e with the wheels held [s].
        """

@final
class StateSpace:
    """
    State space: x' = A x + B u, y = C x + D u.

    Inputs are four road heights [m] and their velocities [m/s]. Unpacks to ``A, B, C, D``.
    """
    @property
    def A(self, /) -> NDArray[float64]:
        """
        State matrix, states x states.
        """
    @property
    def B(self, /) -> NDArray[float64]:
        """
        Input matrix, states x 8.
        """
    @property
    def C(self, /) -> NDArray[float64]:
        """
        Output matrix, outputs x states.
        """
    @property
    def D(self, /) -> NDArray[float64]:
        """
        Feedthrough, outputs x 8.
        """
    def __copy__(self, /) -> StateSpace: ...
    def __deepcopy__(self, /, _memo: Any) -> StateSpace: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __getitem__(self, index: SupportsIndex, /) -> NDArray[float64]: ...
    def __iter__(self, /) -> Iterator[NDArray[float64]]: ...
    def __len__(self, /) -> int: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> StateSpace: ...
    @property
    def inputs(self, /) -> list[str]:
        """
        Names of the inputs.
        """
    @property
    def output_units(self, /) -> list[str]:
        """
        Units of the outputs.
        """
    @property
    def outputs(self, /) -> list[str]:
        """
        Names of the outputs.
        """
    @property
    def states(self, /) -> list[str]:
        """
        Names of the states.
        """

@final
class Sweep:
    """
    States and modes along a sweep of one number or one load, modes followed by shape.

    Arrays of states are values x columns, NaN where a state does not settle (see `status`). Arrays of modes are
    branches x values, NaN where a branch is not there: a pair that turns into two real poles goes on as one of them,
    and the other begins a branch. Modes are computed when they are first asked for.
    """
    def __copy__(self, /) -> Sweep: ...
    def __deepcopy__(self, /, _memo: Any) -> Sweep: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Sweep: ...
    @property
    def attitude(self, /) -> NDArray[float64]:
        """
        Heave [m], pitch [rad] and roll [rad], values x 3.
        """
    @property
    def circuits(self, /) -> list[str]:
        """
        Names of the circuits.
        """
    @property
    def cross_weight(self, /) -> NDArray[float64]:
        """
        Cross weight of the tyre loads, (FR + RL) over all.
        """
    @property
    def damping_ratio(self, /) -> NDArray[float64]:
        """
        Damping ratios, branches x values [1].
        """
    @property
    def deflection(self, /) -> NDArray[float64]:
        """
        Suspension deflections, values x 4 [m].
        """
    @property
    def frequency(self, /) -> NDArray[float64]:
        """
        Natural frequencies, branches x values [Hz].
        """
    @property
    def front_transfer(self, /) -> NDArray[float64]:
        """
        Share of the lateral load transfer that the front axle takes; NaN without any.
        """
    @property
    def gas_volume(self, /) -> NDArray[float64]:
        """
        Gas volumes, values x circuits [m^3].
        """
    @property
    def label(self, /) -> list[str]:
        """
        Label of each branch where it begins.
        """
    @property
    def likeness(self, /) -> NDArray[float64]:
        """
        Least likeness met from step to step on each branch, 1 for the same shape.
        """
    @property
    def modes(self, /) -> list[Modes]:
        """
        The modes at each value.
        """
    @property
    def passed(self, /) -> list[list[str]]:
        """
        Names of the limits that are passed, at each value.
        """
    @property
    def path(self, /) -> str:
        """
        Path or keyword that is varied.
        """
    @property
    def pitch_gradient(self, /) -> NDArray[float64]:
        """
        Pitch per longitudinal acceleration at each state, nose down positive [rad per m/s^2].
        """
    @property
    def pole(self, /) -> NDArray[complex128]:
        """
        Poles, branches x values [rad/s].
        """
    @property
    def pressure(self, /) -> NDArray[float64]:
        """
        Absolute pressures, values x circuits [Pa].
        """
    @property
    def pressure_per_lateral(self, /) -> NDArray[float64]:
        """
        Pressure per lateral acceleration at each state, values x circuits [Pa per m/s^2].
        """
    @property
    def roll_gradient(self, /) -> NDArray[float64]:
        """
        Roll per lateral acceleration at each state [rad per m/s^2].
        """
    @property
    def row(self, /) -> NDArray[float64]:
        """
        Row of each branch in `modes`, branches x values, as floats; NaN where it is not there.
        """
    @property
    def status(self, /) -> list[str]:
        """
        ``solved``, or the name of the error, at each value.
        """
    def table(self, /) -> Table:
        """
        Frequency and damping at the ends, as a table.

        Returns
        -------
        Table
        """
    def to_xarray(self, /) -> "xarray.Dataset":
        """
        The branches as an `xarray.Dataset`.

        Returns
        -------
        xarray.Dataset
        """
    @property
    def tyre_load(self, /) -> NDArray[float64]:
        """
        Tyre loads, values x 4 [N].
        """
    @property
    def unit(self, /) -> str:
        """
        Unit of the values.
        """
    @property
    def values(self, /) -> NDArray[float64]:
        """
        Values, in SI.
        """

@final
class Table:
    """
    Table with a title, headings that carry the units, and notes.

    `print` shows it as text, Jupyter as HTML.
    """
    def __eq__(self, value: object, /) -> bool: ...
    def __ne__(self, value: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> Table: ...

@final
class Vehicle:
    """
    A four-wheeled vehicle at its design condition.

    Immutable; made by `load`, `loads`, `example` or `Vehicle.from_dict`. Two vehicles are equal when their
    files would be.
    """
    def __copy__(self, /) -> Vehicle: ...
    def __deepcopy__(self, /, _memo: Any) -> Vehicle: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[str]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    def case_table(self, /) -> Table:
        """
        The load cases of the file, as one table.

        Returns
        -------
        Table
        """
    @property
    def cases(self, /) -> list[str]:
        """
        Names of the load cases in the file.
        """
    @property
    def circuits(self, /) -> list[str]:
        """
        Names of the circuits.
        """
    def decoupling(self, /, first: str, second: str) -> Decoupling:
        """
        For every number the value that would decouple two motions in stiffness, solved one number at a time.

        Parameters
        ----------
        first : str
            One of heave, pitch, roll and warp.
        second : str
            Another of them.

        Returns
        -------
        Decoupling

        Raises
        ------
        InvalidInput
            For a name that is no motion.
        """
    @property
    def description(self, /) -> str | None:
        """
        Description given in the file.
        """
    def fault_table(self, /, **condition: "typing.Any") -> "Table":
        """
        The state each single fault leaves the vehicle in, the worst first.

        Parameters
        ----------
        **condition : keywords of settle
            What it stands under beside the fault.

        Returns
        -------
        Table
        """
    def faults(self, /) -> list[Fault]:
        """
        Every single fault the layout can have.

        Returns
        -------
        list of Fault
        """
    @staticmethod
    def from_dict(data: "collections.abc.Mapping[str, object]") -> "Vehicle":
        """
        Builds a vehicle from the data of its file.

        Parameters
        ----------
        data : mapping
            The tables of the file; numbers in SI, or text with a unit.

        Returns
        -------
        Vehicle

        Raises
        ------
        InvalidInput
            With every violation at once.
        """
    @property
    def name(self, /) -> str | None:
        """
        Name given in the file.
        """
    def parameters(self, /) -> list[Parameter]:
        """
        Every number once, as the file gives it, ordered by path.

        Returns
        -------
        list of Parameter
        """
    def readings(self, /, **condition: "typing.Any") -> "Readings":
        """
        What a chassis engineer reads off a state: gradients, load transfer, twist, wheel lift.

        Parameters
        ----------
        **condition : keywords of settle
            The state they are read about; ``fast=True`` for changes without heat exchange.

        Returns
        -------
        Readings

        Raises
        ------
        NotConverged
            Where no equilibrium is found.
        """
    def readings_table(self, /, **condition: "typing.Any") -> "Table":
        """
        Readings of slow and fast changes, with oil and without, side by side.

        Parameters
        ----------
        **condition : keywords of settle
            The state they are read about.

        Returns
        -------
        Table
        """
    def save(self, /, path: str | PathLike[str]) -> None:
        """
        Writes a file in SI; it is replaced as a whole or not at all.

        Parameters
        ----------
        path : str or os.PathLike
            JSON if it ends with ``.json``, else TOML.

        Raises
        ------
        OSError
            Where the file cannot be written.
        """
    @property
    def settings(self, /) -> list[str]:
        """
        Names of the settings in the file.
        """
    def settle(self, /, *, lateral: SupportsFloat | SupportsIndex = 0.0, longitudinal: SupportsFloat | SupportsIndex = 0.0, vertical: SupportsFloat | SupportsIndex = 0.0, payload: "Payload | collections.abc.Sequence[Payload] | None" = None, temperature: SupportsFloat | SupportsIndex | None = None, heights: "collections.abc.Sequence[float] | None" = None, downforce: "tuple[float, float] | None" = None, side_slope: SupportsFloat | SupportsIndex = 0.0, grade: SupportsFloat | SupportsIndex = 0.0, spring_seat: "collections.abc.Sequence[float] | None" = None, oil: "dict[str, float] | None" = None, pressure: "dict[str, float] | None" = None, levelled: bool = False, fault: "Fault | collections.abc.Sequence[Fault] | None" = None, fast: bool = False) -> "OperatingPoint":
        """
        The operating point; without arguments that of the design condition.

        Parameters
        ----------
        lateral : float
            Acceleration to the left [m/s^2].
        longitudinal : float
            Acceleration forward [m/s^2].
        vertical : float
            Acceleration upwards, added to gravity [m/s^2].
        payload : Payload or list of Payload, optional
            Point masses carried.
        temperature : float, optional
            Temperature of gas and oil [K].
        heights : sequence of 4 floats, optional
            Height of the ground under each wheel [m].
        downforce : (float, float), optional
            Aerodynamic load front and rear, downwards [N].
        side_slope : float
            Slope of the ground across, left side higher [rad].
        grade : float
            Slope of the ground ahead, uphill [rad].
        spring_seat : sequence of 4 floats, optional
            Lift of the spring seats, which compresses the springs [m of spring travel].
        oil : mapping of str to float, optional
            Oil added per circuit [m^3]; springs are held, the height follows.
        pressure : mapping of str to float, optional
            Pressure that circuits are brought to [Pa, absolute]; springs are held, height and oil follow.
        levelled : bool
            Whether every circuit's chambers are brought back to their design volume; the oil that takes is found.
        fault : Fault or list of Fault, optional
            What has failed.
        fast : bool
            Whether the gas exchanges no heat from the standing vehicle (without accelerations, slopes, heights and
            aerodynamic load) to this state; slow lines are shut then.

        Returns
        -------
        OperatingPoint

        Raises
        ------
        InvalidInput
            With everything that is wrong with the condition.
        NotConverged
            Where no equilibrium is found; with the last state.
        """
    def settle_case(self, /, name: str) -> OperatingPoint:
        """
        The operating point of a load case of the file.

        Parameters
        ----------
        name : str
            One of `cases`.

        Returns
        -------
        OperatingPoint

        Raises
        ------
        InvalidInput
            For a name that is not known.
        NotConverged
            Where no equilibrium is found.
        """
    def sweep(self, /, path: str, values: "numpy.typing.ArrayLike", **condition: "typing.Any") -> "Sweep":
        """
        Varies one number, or one load, and follows the states and every mode by shape.

        Modes are computed when they are first asked for.

        Parameters
        ----------
        path : str
            Path of the number, or a keyword of `settle`: ``lateral``, ``temperature``, ``heights.front_left``,
            ``heights.twist`` (h times 1, -1, -1, 1), ``downforce.front``, ``payload.mass`` (of the first),
            ``oil.left`` and the like.
        values : array_like
            Its values, in SI, in the order to be followed.
        **condition : keywords of settle
            Further keywords of `settle` that hold all along.

        Returns
        -------
        Sweep

        Raises
        ------
        InvalidInput
            For an unknown path, or values out of their bounds; nothing is computed then.
        """
    def table(self, /) -> Table:
        """
        Every number with its path, value and unit, as a table.

        Returns
        -------
        Table
        """
    def to_dict(self, /) -> "dict[str, object]":
        """
        The data of the file, in SI.

        Returns
        -------
        dict
        """
    def to_json(self, /) -> str:
        """
        The file as JSON, in SI.

        Returns
        -------
        str
        """
    def to_toml(self, /) -> str:
        """
        The file as TOML, in SI.

        Returns
        -------
        str
        """
    def value(self, /, path: str) -> float:
        """
        The number at a path.

        One side of a pair, or one circuit of a layout, can be read too.

        Parameters
        ----------
        path : str
            E.g. ``front.left.tyre.rate``.

        Returns
        -------
        float
            In SI.

        Raises
        ------
        InvalidInput
            For an unknown path, with the nearest ones.
        """
    def wheel_rates(self, /, travel: "numpy.typing.ArrayLike", fast: bool = False) -> "WheelRates":
        """
        Forces and rates of the suspension over its travel, in each motion and at one wheel of each axle.

        Parameters
        ----------
        travel : array_like
            Travel of each wheel of the pattern, bump positive [m].
        fast : bool
            Whether the gas exchanges no heat.

        Returns
        -------
        WheelRates

        Raises
        ------
        NotConverged
            Where oil has nowhere to go.
        """
    def with_setting(self, /, name: str) -> Vehicle:
        """
        The vehicle with a named setting of its file applied.

        Parameters
        ----------
        name : str
            One of `settings`.

        Returns
        -------
        Vehicle

        Raises
        ------
        InvalidInput
            For a name that is not known.
        """
    def with_values(self, /, values: "collections.abc.Mapping[str, float | str]") -> "Vehicle":
        """
        A vehicle with other numbers at some paths.

        Setting one side of a pair, or one circuit of a layout, splits it.

        Parameters
        ----------
        values : mapping of str to float or str
            By path: SI numbers, or text with a unit.

        Returns
        -------
        Vehicle

        Raises
        ------
        InvalidInput
            With every violation at once; unknown paths name the nearest ones.
        """
    def without_oil(self, /) -> Vehicle:
        """
        The vehicle without oil and cylinders; springs carry all, at the same height.

        Returns
        -------
        Vehicle
        """

@final
class WheelRates:
    """
    Forces and rates of the suspension over its travel; rows are `patterns`.
    """
    def __copy__(self, /) -> WheelRates: ...
    def __deepcopy__(self, /, _memo: Any) -> WheelRates: ...
    def __eq__(self, other: object, /) -> bool: ...
    def __reduce__(self, /) -> "tuple[object, tuple[bytes]]": ...
    def __repr__(self, /) -> str: ...
    def __str__(self, /) -> str: ...
    def _repr_html_(self, /) -> str: ...
    @staticmethod
    def _restore(data: bytes) -> WheelRates: ...
    @property
    def fast(self, /) -> bool:
        """
        Whether the gas exchanges no heat.
        """
    @property
    def force(self, /) -> NDArray[float64]:
        """
        Force per wheel along the pattern, 6 x travels [N].
        """
    @property
    def patterns(self, /) -> list[str]:
        """
        Names of the rows: the four motions, then one wheel of each axle.
        """
    @property
    def rate(self, /) -> NDArray[float64]:
        """
        Tangent rate per wheel along the pattern, 6 x travels [N/m].
        """
    def table(self, /) -> Table:
        """
        Rates over travel as a table.

        Returns
        -------
        Table
        """
    @property
    def travel(self, /) -> NDArray[float64]:
        """
        Travel of each wheel of the pattern, bump positive [m].
        """

def example(name: str) -> Vehicle:
    """
    One of the example vehicles, all of them inventions.

    Parameters
    ----------
    name : str
        One of `examples()`.

    Returns
    -------
    Vehicle

    Raises
    ------
    InvalidInput
        For a name that is not known, with the nearest ones.
    """

def examples() -> list[str]:
    """
    Names of the example vehicles.

    Returns
    -------
    list of str
    """

def load(path: str | PathLike[str]) -> Vehicle:
    """
    Reads a vehicle file.

    Parameters
    ----------
    path : str or os.PathLike
        A `.toml` or `.json` file.

    Returns
    -------
    Vehicle

    Raises
    ------
    InvalidInput
        With every violation at once.
    ParseError
        Where the text is not TOML or JSON.
    OSError
        Where the file cannot be read.
    """

def loads(text: str) -> Vehicle:
    """
    Reads a vehicle from the text of a file, TOML or JSON.

    Parameters
    ----------
    text : str
        JSON if it begins with ``{``, else TOML.

    Returns
    -------
    Vehicle

    Raises
    ------
    InvalidInput
        With every violation at once.
    ParseError
        Where the text is not TOML or JSON.
    """

def schema() -> "dict[str, object]":
    """
    JSON Schema of the vehicle file (draft 2020-12), generated from the core's tables of fields.

    Returns
    -------
    dict
        Every number carries its SI unit at ``unit``.
    """
