"""Worst case: corners, root-sum-square, the search beyond twelve parameters, and what must not be trusted."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.circuit.linear import Array
from pwmlint.lint.circuit.network import Sample
from pwmlint.lint.circuit.worst_case import Analysis, Evaluate, Parameter, Samples, Variation, analyse

Formula = Callable[[Sample], Array]


def tolerance(name: str, nominal: float, ratio: float) -> Parameter:
    return Parameter(name, nominal * (1 - ratio), nominal, nominal * (1 + ratio))


def supply(name: str, low: float, nominal: float, high: float) -> Parameter:
    return Parameter(name, low, nominal, high, Variation.RANGE)


def travel(name: str) -> Parameter:
    return Parameter(name, 0.0, 0.5, 1.0, Variation.TRAVEL)


def analysis(parameters: Sequence[Parameter], formula: Formula) -> Analysis:
    return analyse(parameters, lambda sample, _: {"quantity": formula(sample)}, {"quantity": "V"})["quantity"]


def ends(found: Analysis) -> tuple[float, float]:
    return found.spread.minimum, found.spread.maximum


class TestParameter:
    def test_crossed_ends_are_refused(self):
        with pytest.raises(ValueError, match=r"R1: 2.0 .. 1.0 .. 3.0"):
            Parameter("R1", 2.0, 1.0, 3.0)


class TestExtremeValues:
    def test_nothing_varies(self):
        found = analysis([Parameter("R1", 5.0, 5.0, 5.0)], lambda s: s["R1"])
        assert ends(found) == (5.0, 5.0)
        assert found.statistical == found.spread
        assert found.contributions == ()
        assert found.monotonic

    def test_no_parameters_at_all(self):
        found = analyse([], lambda _, size: {"quantity": np.full(size, 7.0)}, {"quantity": "V"})["quantity"]
        assert ends(found) == (7.0, 7.0)

    def test_every_parameter_at_its_worst_end(self):
        found = analysis([tolerance("A", 10, 0.1), tolerance("B", 5, 0.2)], lambda s: s["A"] / s["B"])
        assert ends(found) == pytest.approx((9 / 6, 11 / 4))
        assert found.spread.nominal == 2.0
        assert found.monotonic

    def test_a_trimmer_is_looked_at_between_its_ends(self):
        # The source resistance of a trimmer is greatest in the middle of its travel.
        found = analysis([travel("RV1")], lambda s: 10e3 * s["RV1"] * (1 - s["RV1"]))
        assert ends(found) == (0.0, 2.5e3)
        assert found.monotonic

    def test_units_and_names_are_kept_apart(self):
        def both(sample: Sample, _size: int) -> Mapping[str, Array]:
            return {"ohms": sample["R"], "amperes": 1 / sample["R"]}

        found = analyse([tolerance("R", 2.0, 0.5)], both, {"ohms": "ohm", "amperes": "A"})
        assert (found["ohms"].spread.unit, found["amperes"].spread.unit) == ("ohm", "A")
        assert ends(found["amperes"]) == pytest.approx((1 / 3, 1.0))


class TestRootSumSquare:
    def test_tolerances_are_root_summed(self):
        found = analysis([tolerance("A", 10, 0.03), tolerance("B", 10, 0.04)], lambda s: s["A"] + s["B"])
        assert (found.statistical.minimum, found.statistical.maximum) == pytest.approx((19.5, 20.5))

    def test_supplies_are_never_root_summed(self):
        found = analysis([tolerance("A", 10, 0.03), supply("VIN", 6, 10, 14)], lambda s: s["A"] + s["VIN"])
        assert (found.statistical.minimum, found.statistical.maximum) == pytest.approx((15.7, 24.3))

    def test_trimmers_are_never_root_summed(self):
        found = analysis([tolerance("A", 10, 0.1), travel("RV1")], lambda s: s["A"] * s["RV1"])
        assert (found.statistical.minimum, found.statistical.maximum) == pytest.approx((0.0, 11.0))

    def test_bias_adds_in_full(self):
        # Half of each 8 % is bias: 0.4 + 0.4, and the root of 0.4 and 0.4 squared.
        parameters = [Parameter(name, 9.2, 10.0, 10.8, random=0.5) for name in "AB"]
        found = analysis(parameters, lambda s: s["A"] + s["B"])
        half_width = 0.8 + np.hypot(0.4, 0.4)
        assert found.statistical.maximum == pytest.approx(20 + half_width)
        assert found.statistical.minimum == pytest.approx(20 - half_width)

    def test_never_misses_the_nominal(self):
        found = analysis([Parameter("A", 0.0, 0.0, 1.0)], lambda s: s["A"])
        assert found.statistical.minimum <= 0.0 <= found.statistical.maximum


class TestContributions:
    def test_ranked_with_labels(self):
        parameters = [
            Parameter("R1", 9.9, 10, 10.1, label="R1 tolerance"),
            Parameter("R2", 9.7, 10, 10.3),
            Parameter("R3", 9, 10, 11),
        ]
        found = analysis(parameters, lambda s: s["R1"] - s["R2"] + 0 * s["R3"])
        assert [label for label, _ in found.contributions] == ["R2", "R1 tolerance"]
        assert [share for _, share in found.contributions] == pytest.approx([0.75, 0.25])

    def test_an_infinite_contribution_is_not_weighed(self):
        with np.errstate(divide="ignore"):
            found = analysis(
                [Parameter("A", 0.0, 1.0, 2.0), tolerance("B", 1.0, 0.1)],
                lambda s: s["B"] + np.divide(1.0, s["A"], out=np.full_like(s["A"], np.inf), where=s["A"] > 0),
            )
        assert [label for label, _ in found.contributions] == ["B"]


class TestWhatIsNotMonotonic:
    def test_nominal_outside_its_corners(self):
        # f(x) = x (1 - x) about 0.5, whose corners 0.24 and 0.21 miss the nominal 0.25
        found = analysis([Parameter("x", 0.4, 0.5, 0.7)], lambda s: s["x"] * (1 - s["x"]))
        assert not found.monotonic

    def test_a_pole_between_the_corners(self):
        found = analysis(
            [Parameter("x", -1.0, 1.9, 2.0), tolerance("y", 1.0, 0.1)], lambda s: s["y"] / s["x"]
        )
        assert not found.monotonic

    def test_rounding_does_not_count(self):
        found = analysis([tolerance("x", 1.0, 0.1)], lambda s: 1e6 + 1e-13 * np.sin(1e3 * s["x"]))
        assert found.monotonic


class TestInfiniteResults:
    @staticmethod
    def trips_above(sample: Sample) -> Array:
        """Return a current limit that a great R1 puts out of reach."""
        return np.where(sample["R1"] > 1.05, np.inf, sample["R1"] * sample["R2"])

    def test_an_end_may_be_infinite(self):
        found = analysis([tolerance("R1", 1, 0.1), tolerance("R2", 1, 0.1)], self.trips_above)
        assert ends(found) == pytest.approx((0.81, np.inf))
        assert found.spread.nominal == 1.0

    def test_statistics_fall_back_on_the_extreme_values(self):
        found = analysis([tolerance("R1", 1, 0.1), tolerance("R2", 1, 0.1)], self.trips_above)
        assert found.statistical.maximum == np.inf
        assert found.statistical.minimum == pytest.approx(0.81)

    def test_everything_infinite(self):
        found = analysis([tolerance("R1", 1, 0.1)], lambda s: np.full_like(s["R1"], np.inf))
        assert ends(found) == (np.inf, np.inf)
        assert found.statistical == found.spread

    def test_bias_share_of_an_infinite_width(self):
        parameters = [Parameter("R1", 0.9, 1.0, 1.1, random=0.5), Parameter("R2", 0.9, 1.0, 1.1)]
        assert ends(analysis(parameters, self.trips_above))[1] == np.inf


def bridge(count: int) -> tuple[list[Parameter], Formula]:
    """Return `count` resistors from two supplies to one net, and how far its potential is off their middle.

    At nominal the supplies are equal, so that no resistor matters there; the worst corners are far off.
    """
    parameters = [supply("VA", 5, 10, 15), supply("VB", 5, 10, 15)]
    parameters += [tolerance(f"R{i}", 1e3, 0.1) for i in range(count)]

    def middle_error(sample: Sample) -> Array:
        to_a = np.sum([1 / sample[f"R{i}"] for i in range(0, count, 2)], axis=0)
        to_b = np.sum([1 / sample[f"R{i}"] for i in range(1, count, 2)], axis=0)
        potential = (to_a * sample["VA"] + to_b * sample["VB"]) / (to_a + to_b)
        return potential - (sample["VA"] + sample["VB"]) / 2

    return parameters, middle_error


class TestBeyondTwelveParameters:
    @pytest.mark.parametrize("count", [8, 12, 14, 40])
    def test_signs_that_the_supplies_turn(self, count: int):
        # By hand: VA = 15 V, VB = 5 V, all towards A at 900 ohm, all towards B at 1100 ohm: 0.5 V.
        found = analysis(*bridge(count))
        assert ends(found) == pytest.approx((-0.5, 0.5))

    @settings(max_examples=25, deadline=None)
    @given(data=st.data())
    def test_bounds_brute_force(self, data: st.DataObject):
        # A quotient of two sums of products: every sum has a parameter in common with others.
        weights = data.draw(
            st.lists(st.floats(-2, 2).map(lambda x: round(x, 2)), min_size=14, max_size=14), label="weights"
        )
        parameters = [tolerance(f"p{i}", 1.0, 0.1) for i in range(14)]

        def quotient(sample: Sample) -> Array:
            columns = [sample[f"p{i}"] for i in range(14)]
            above = np.sum([w * c for w, c in zip(weights, columns, strict=True)], axis=0)
            return above * columns[0] / (20 + np.sum(columns[1:], axis=0))

        found = analysis(parameters, quotient)
        random = np.random.default_rng(7)
        drawn = {p.name: random.choice([p.low, p.high], 20_000) for p in parameters}
        brute = quotient(drawn)
        slack = 1e-9 * max(abs(x) for x in ends(found))
        if found.monotonic:
            assert found.spread.minimum <= np.min(brute) + slack
            assert found.spread.maximum >= np.max(brute) - slack

    def test_agrees_with_all_corners(self):
        def product_of(names: Sequence[str]) -> Formula:
            return lambda s: np.prod([s[name] for name in names], axis=0)

        names = [f"p{i}" for i in range(16)]
        found = analysis([tolerance(name, 1.0, 0.01) for name in names], product_of(names))
        assert ends(found) == pytest.approx((0.99**16, 1.01**16))

    def test_a_corner_that_no_single_step_from_nominal_shows(self):
        # Only together do the two pull the result down: their signs depend on each other.
        parameters = [supply("A", -1, 0.5, 1), supply("B", -1, 0.5, 1)]
        parameters += [tolerance(f"p{i}", 1.0, 0.001) for i in range(12)]
        found = analysis(parameters, lambda s: s["A"] * s["B"] + 1e-3 * s["p1"])
        assert ends(found)[0] == pytest.approx(-1, abs=2e-3)

    def test_six_trimmers_are_looked_at_within_bounded_memory(self):
        sizes: list[int] = []

        def mean(sample: Sample, size: int) -> Mapping[str, Array]:
            sizes.append(size)
            return {"mean": np.mean(list(sample.values()), axis=0)}

        found = analyse([travel(f"RV{i}") for i in range(6)], mean, {"mean": ""})["mean"]
        assert ends(found) == (0.0, 1.0)
        assert max(sizes) <= 1024
        assert sum(sizes) < 20_000

    def test_fifty_supplies_are_all_turned(self):
        parameters = [supply(f"V{i}", 0, 1, 2) for i in range(50)]
        found = analysis(parameters, lambda s: np.sum(list(s.values()), axis=0))
        assert ends(found) == (0.0, 100.0)
        assert found.statistical == found.spread  # too many to combine: never narrower than the extremes

    def test_a_search_that_never_comes_to_rest_is_not_trusted(self):
        drift = iter(range(1, 10_000))
        parameters = [tolerance(f"p{i}", 1.0, 0.1) for i in range(14)]
        assert not analysis(parameters, lambda s: s["p0"] + float(next(drift))).monotonic


class TestSamples:
    def test_slices_leave_no_seam(self):
        parameters = [tolerance(f"p{i}", 1.0, 0.1) for i in range(12)]
        evaluate: Evaluate = lambda s, _: {"sum": np.sum(list(s.values()), axis=0)}  # noqa: E731
        corners = Samples(parameters).corners()
        assert len(corners) == 4096
        assert len(np.unique(corners, axis=0)) == 4096
        assert ends(analyse(parameters, evaluate, {"sum": ""})["sum"]) == pytest.approx((10.8, 13.2))

    def test_outer_corners_keep_tolerances_at_nominal(self):
        samples = Samples([tolerance("R1", 1.0, 0.1), supply("VIN", 1, 2, 3), travel("RV1")])
        corners = samples.outer_corners()
        assert len(corners) == 10
        assert set(corners[:, 0]) == {1.0}


@pytest.mark.parametrize("turn", [0.2, 0.3, 0.7, 0.8])
def test_a_quantity_that_turns_between_nominal_and_an_end_is_flagged(turn: float):
    # (x - turn)^2 over 0 .. 1 about 0.5: the corners alone bound the nominal value and still miss the zero
    parameters = [Parameter("x", 0.0, 0.5, 1.0)]
    found = analyse(parameters, lambda sample, _: {"it": (sample["x"] - turn) ** 2}, {"it": ""})["it"]
    assert not found.monotonic
