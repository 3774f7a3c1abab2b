"""The thermal-occupancy endpoint: what it takes and what it returns."""

from schemas.curve import CurveRequest
from schemas.fermi_level import method
from schemas.output_units import OutputUnits
from schemas.result import Answer, LevelsMember, Result


class ThermalOccupancyResult(Result):
    """How the occupation falls off, what each level holds, and how much is excited."""

    energy = Answer("curve")
    occupation = Answer("curve")
    thermal_broadening = Answer("curve")
    occupied_density = Answer("curve")
    levels = LevelsMember()
    excited_fraction = Answer()
    mean_energy = Answer()
    transition_width = Answer()
    fermi_energy = Answer()
    chemical_potential = Answer()
    lowest_level = Answer()
    method = method()
    relative_error_bound = Answer()


class ThermalOccupancyRequest(CurveRequest):
    """A sample, or arrays of samples, and the energies of their curves."""

    output_units = OutputUnits(*ThermalOccupancyResult.quantities())
