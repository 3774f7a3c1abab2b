"""The density-of-states endpoint: what it takes and what it returns."""

from schemas.curve import Broadening, CurveRequest
from schemas.fermi_level import method
from schemas.output_units import OutputUnits
from schemas.result import Answer, LevelsMember, Result
from schemas.strict import Object


class DensityOfStatesResult(Result):
    """The density of states over energy, and its integral."""

    energy = Answer("curve")
    density_of_states = Answer("curve")
    integrated_states = Answer("curve")
    levels = LevelsMember()
    fermi_energy = Answer()
    chemical_potential = Answer()
    lowest_level = Answer()
    method = method()
    relative_error_bound = Answer()


class DensityOfStatesRequest(CurveRequest):
    """A sample, or arrays of samples, the energies of their curves, and how the states are broadened."""

    broadening = Object(
        Broadening(),
        metadata={"description": "How sharp states are spread; default none, in a box or sphere thermal."},
    )
    output_units = OutputUnits(*DensityOfStatesResult.quantities())
