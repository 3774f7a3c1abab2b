"""What a request would cost: refused before anything is listed, with the limit and what would fit."""

import re
import time

import numpy as np
import pytest

from samples import batch, sample
from service.calculators.density_of_states import density_of_states
from service.calculators.fermi_level import fermi_level
from service.calculators.thermal_occupancy import thermal_occupancy
from service.errors import TooLarge
from service.physics.broadening import Broadening

HUGE = {"length": 5e-6, "width": 5e-6, "height": 5e-6}


@pytest.mark.parametrize("calculate", [fermi_level, density_of_states, thermal_occupancy])
def test_an_enormous_box_is_refused_at_once(calculate):
    began = time.perf_counter()
    with pytest.raises(TooLarge, match="limit"):
        calculate(sample("box", lengths=HUGE))
    assert time.perf_counter() - began < 1


def test_a_batch_that_is_too_large_says_how_many_would_fit_and_so_many_do():
    boxes = [sample("box", temperature=3000.0)] * 20_000
    with pytest.raises(TooLarge) as refused:
        fermi_level(batch(boxes))
    fitting = int(re.search(r"about (\d+) of these", str(refused.value)).group(1))
    assert 1 < fitting < 20_000
    fermi_level(batch(boxes[:20]))


def test_a_curve_that_is_too_large_says_how_many_energies_would_fit():
    box = sample("box", lengths={"length": 30e-9, "width": 30e-9, "height": 30e-9})
    energies = np.linspace(0, 1e-19, 100_000)
    with pytest.raises(TooLarge, match=r"about \d+ energies would fit"):
        density_of_states(box, energies, Broadening("gaussian", 1e-21))


def test_energies_far_above_the_carriers_are_refused_rather_than_listed():
    with pytest.raises(TooLarge, match="levels"):
        density_of_states(sample("box"), np.array([1e-15]), Broadening("gaussian", 1e-21))


@pytest.mark.parametrize("kind", ["cylinder", "sphere"])
def test_a_round_shape_of_a_tenth_of_a_millimetre_is_answered_by_the_continuum_with_its_bound(kind):
    result = fermi_level(sample(kind, lengths={"diameter": 1e-4}, carrier_density=5.9e28, mass=1.0))
    assert result.method == "continuum"
    assert 0 < result.relative_error_bound < 1e-6


@pytest.mark.parametrize("kind", ["bulk", "film", "sheet", "line"])
def test_what_is_in_closed_form_costs_no_levels(kind):
    fermi_level(batch([sample(kind)] * 1000))
