"""What can go wrong, as exceptions with fields.

The messages are written by the core; the fields say the same for programs.
"""

from typing import Any, NamedTuple


class Violation(NamedTuple):
    """One rule that the input breaks.

    Attributes
    ----------
    path : str
        Place in the vehicle, e.g. ``front.both.spring.rate``.
    value : str
        The value as given.
    unit : str
        Unit that the place expects, ``1`` if none.
    rule : str
        The rule that is broken.
    hint : str
        The way out, or the likely slip.
    """

    path: str
    value: str
    unit: str
    rule: str
    hint: str


class RidemodesError(Exception):
    """Base of the exceptions of this package."""

    def __reduce__(self) -> tuple[Any, ...]:
        return type(self)._restore, (self.args, self.__dict__)

    @classmethod
    def _restore(cls, args: tuple[Any, ...], fields: dict[str, Any]) -> "RidemodesError":
        error = cls.__new__(cls, *args)
        error.args = args
        error.__dict__.update(fields)
        return error


class InvalidInput(RidemodesError, ValueError):
    """The input breaks rules; nothing was built.

    Attributes
    ----------
    violations : tuple of Violation
        All of them, ordered by path.
    """

    def __init__(self, message: str, violations: list[tuple[str, str, str, str, str]]) -> None:
        super().__init__(message)
        self.violations = tuple(Violation(*violation) for violation in violations)


class ParseError(RidemodesError, ValueError):
    """The text is not TOML or JSON.

    Attributes
    ----------
    line, column : int
        Where, from 1.
    """

    def __init__(self, message: str, line: int, column: int) -> None:
        super().__init__(message)
        self.line = line
        self.column = column


class Singular(RidemodesError, ArithmeticError):
    """A matrix that must be regular is not.

    Attributes
    ----------
    matrix : str
        Which matrix.
    motion : str
        The free or locked motion found.
    """

    def __init__(self, message: str, matrix: str, motion: str) -> None:
        super().__init__(message)
        self.matrix = matrix
        self.motion = motion


class NotConverged(RidemodesError, ArithmeticError):
    """An iteration ended without a solution.

    Attributes
    ----------
    what : str
        What was being solved.
    iterations : int
        Iterations spent.
    residual : float
        Residual of the last iterate.
    last : list of float
        The last iterate.
    """

    def __init__(
        self, message: str, what: str, iterations: int, residual: float, last: list[float]
    ) -> None:
        super().__init__(message)
        self.what = what
        self.iterations = iterations
        self.residual = residual
        self.last = last
