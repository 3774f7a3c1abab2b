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
def test_a_round_shape_beyond_its_tabulated_levels_is_refused(kind):
    with pytest.raises(TooLarge, match="1000"):
        fermi_level(sample(kind, lengths={"diameter": 1e-5}))
    with pytest.raises(TooLarge, match="1000"):
        density_of_states(sample(kind), np.array([1e-13]), Broadening("gaussian", 1e-21))


@pytest.mark.parametrize("kind", ["bulk", "film", "sheet", "line"])
def test_what_is_in_closed_form_costs_no_levels(kind):
    fermi_level(batch([sample(kind)] * 1000))
