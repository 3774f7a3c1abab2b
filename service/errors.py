"""What can go wrong with a request that was understood, without a word of HTTP.

The tree::

    FillmarkError
    ├── SampleError        the sample, as stated, has no answer
    │   ├── Unsupported    a part of the contract that this version does not compute
    │   └── TooLarge       valid, but beyond a published limit
    └── SettingsError      a wrong setting at start-up
"""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Fault:
    """One fault of a request.

    Attributes
    ----------
    path : tuple of str or int
        Member names and indices from the root of the request down to the fault.
    detail : str
        One sentence: what is wrong and what would do.
    row : int or None
        The sample's index in a batch, or None where the fault is of the request as a whole.
    """

    path: tuple[str | int, ...]
    detail: str
    row: int | None = None


class FillmarkError(Exception):
    """The root of this project's errors."""


class SampleError(FillmarkError):
    """The sample, as stated, has no answer."""

    def __init__(self, *faults: Fault) -> None:
        super().__init__("; ".join(fault.detail for fault in faults))
        self.faults = faults


class Unsupported(SampleError):
    """A part of the contract that this version does not compute."""


class TooLarge(SampleError):
    """Valid, but beyond a published limit."""


class SettingsError(FillmarkError):
    """A setting that the service cannot start with."""
