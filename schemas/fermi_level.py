"""The fermi-level endpoint: what it takes and what it returns."""

from schemas.output_units import OutputUnits
from schemas.result import Answer, Result, Words
from schemas.sample import SampleRequest


def method() -> Words:
    """Return the field that says which way an answer was computed."""
    return Words("closed-form", "level-sum", "continuum", sentence="Which way the answer was computed.")


class FermiLevelResult(Result):
    """Where the Fermi level lies at T = 0 and at T, and what the carriers there are like."""

    fermi_energy = Answer()
    chemical_potential = Answer()
    lowest_level = Answer()
    chemical_potential_above_lowest_level = Answer()
    fermi_temperature = Answer()
    reduced_temperature = Answer()
    fermi_wavevector = Answer()
    fermi_wavelength = Answer()
    fermi_velocity = Answer()
    density_of_states_at_fermi_level = Answer()
    occupied_levels = Answer()
    effective_dimension = Answer()
    wigner_seitz_ratio = Answer()
    regime = Words(
        "degenerate",
        "intermediate",
        "classical",
        sentence="degenerate where (mu - lowest level) / kT > 5, classical where < -4, a rule of thumb.",
    )
    method = method()
    relative_error_bound = Answer()


class FermiLevelRequest(SampleRequest):
    """A sample, or arrays of samples."""

    output_units = OutputUnits(*FermiLevelResult.quantities())
