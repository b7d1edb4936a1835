"""The kernels against their plain NumPy twin."""

import numpy as np
import pytest

from ergo.arm import kernels as k
from ergo.arm.posture_limits import COLUMNS, judge_posture
from tests.arm import numpy_twin
from tests.arm.made_operators import LIMITS, SHAPE, operators, scene, sit, targets


@pytest.mark.parametrize("seed", range(8))
def test_two_thousand_random_postures(seed):
    rng = np.random.default_rng(seed)
    reached, cases = 0, 0
    for op in operators(50, seed):
        seated = rng.random() < 0.3
        person = sit(op) if seated else op
        view = scene(rng.uniform(0.75, 1.1), rng.uniform(0.2, 0.9), ball=rng.random() < 0.5, seated=seated)
        view[k.BRACE_BENCH] = float(not seated and rng.random() < 0.4)
        view[k.BRACE_BACK] = float(seated and rng.random() < 0.5)
        view[k.COM_SLACK] = rng.choice([0.0, 0.2])
        for target in targets(rng, view[k.SURFACE_Z], 5):
            x, y = rng.uniform(-0.3, 0.3), rng.uniform(-0.6, -0.25)
            share, bend = rng.uniform(), rng.uniform(view[k.BEND_MIN], view[k.BEND_MAX])
            swivel = rng.uniform(view[k.SWIVEL_LOW], view[k.SWIVEL_HIGH])
            asked = (person, SHAPE, view, LIMITS, x, y, target, share, bend, swivel)
            force, code = judge_posture(*asked, np.zeros(COLUMNS))
            other, name = numpy_twin.posture(*asked)
            # The kernel's arc cosine is good to 0.004 degrees, which moves a strength by up to 1e-4 of itself.
            assert force == pytest.approx(other, rel=3e-4, abs=1e-6)
            assert code == name or abs(force - other) <= 1e-3 * abs(force)
            reached += force > 0.0
            cases += 1
    assert cases == 250
    assert reached > 20
