"""Coupled ride modes of a four-wheeled vehicle whose suspension corners share oil.

A vehicle is read from a file, settled at its operating point, linearised and solved::

    car = load("car.toml")
    lin = car.settle().linear()
    lin.modes(), lin.motions(), lin.coupling

Everything is SI, pressures are absolute, axes are those of ISO 8855, and corners come in the order
front left, front right, rear left, rear right.

Results are for engineering judgement, not a release to the road: a vehicle with changed suspension
is proven by test, under local rules and by qualified people. Pressurised accumulators can injure;
charge and service them by their maker's instructions.
"""

from typing import TYPE_CHECKING, Any

from ._core import (
    CAUTION,
    ClosedOff,
    Decoupling,
    Element,
    Fault,
    FrequencyResponse,
    Limit,
    LinearSystem,
    Modes,
    Motions,
    OperatingPoint,
    Parameter,
    Payload,
    Readings,
    Sensitivities,
    SlowLine,
    StateSpace,
    Sweep,
    Table,
    Vehicle,
    WheelRates,
    example,
    examples,
    load,
    loads,
    schema,
)
from ._core import VERSION as __version__
from .errors import InvalidInput, NotConverged, ParseError, RidemodesError, Singular, Violation

if TYPE_CHECKING:
    from . import plot

__all__ = [
    "CAUTION",
    "ClosedOff",
    "Decoupling",
    "Element",
    "Fault",
    "FrequencyResponse",
    "InvalidInput",
    "Limit",
    "LinearSystem",
    "Modes",
    "Motions",
    "NotConverged",
    "OperatingPoint",
    "Parameter",
    "ParseError",
    "Payload",
    "Readings",
    "RidemodesError",
    "Sensitivities",
    "Singular",
    "SlowLine",
    "StateSpace",
    "Sweep",
    "Table",
    "Vehicle",
    "Violation",
    "WheelRates",
    "__version__",
    "example",
    "examples",
    "load",
    "loads",
    "plot",
    "schema",
]


def __getattr__(name: str) -> Any:
    # Importing matplotlib takes longer than all the rest.
    if name == "plot":
        from importlib import import_module

        return import_module(".plot", __name__)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__, "__version__"})
