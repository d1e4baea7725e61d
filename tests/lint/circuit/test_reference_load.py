"""What a controller's reference feeds, in all and branch by branch."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.reference_load import ReferenceLoad
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Unsolved

FanOf = Callable[..., Design]


def load(design: Design) -> ReferenceLoad:
    found = design.reference_load(design.controllers[0])
    assert isinstance(found, ReferenceLoad), found
    return found


class TestTotal:
    def test_dividers(self, fan_of: FanOf):
        # 5 V over 10.2 k, 5 k and 11 k; bias currents of microamperes aside.
        found = load(fan_of())
        by_hand = 5 / 10.2e3 + 5 / 5e3 + 5 / 11e3
        assert found.total.spread.nominal == pytest.approx(by_hand, rel=5e-3)

    def test_with_the_output_control_pin_on_it(self, fan_of: FanOf):
        # SLVS074 p.5: up to 3.5 mA into the pin at the reference.
        plain = load(fan_of()).total.spread.maximum
        tied = load(fan_of(R12="R12 MODE VREF 0")).total.spread.maximum
        assert tied - plain == pytest.approx(3.5e-3, rel=0.01)

    def test_branches_sum_up_at_nominal(self, fan_of: FanOf):
        found = load(fan_of(R12="R12 MODE VREF 0"))
        assert sum(branch.spread.nominal for _, branch in found.branches) == pytest.approx(
            found.total.spread.nominal
        )

    def test_greatest_branch_first(self, fan_of: FanOf):
        names = [name for name, _ in load(fan_of()).branches]
        assert names[0] == "R5"
        assert set(names) == {"R5", "R3", "R2"}

    def test_through_shorts_in_parallel(self, fan_of: FanOf):
        found = load(fan_of(L8="L8 VREF AREF 10u", L9="L9 VREF AREF 10u", R20="R20 AREF 0 1k tol=0"))
        assert found.total.spread.nominal == pytest.approx(5 / 10.2e3 + 5 / 5e3 + 5 / 11e3 + 5e-3, rel=5e-3)
        assert dict(found.branches)["L8"].spread.nominal == pytest.approx(2.5e-3, rel=1e-6)

    def test_a_trimmer_whose_stop_shorts_it(self, fan_of: FanOf):
        assert load(fan_of(RV1="RV1 VREF VREF 0 10k")).total.spread.maximum == float("inf")


class TestWhatIsNotKnown:
    @pytest.mark.parametrize(
        ("line", "reference"),
        [("XU2 VREF 0 SENSOR", "U2"), ("B1 VREF 0 I=1m", "B1"), ("Q9 VREF DTC 0 QP", "Q9")],
    )
    def test_parts_that_draw_who_knows_what(self, line: str, reference: str, fan_of: FanOf):
        found = load(fan_of(other=line))
        assert any(f"what {reference} " in sentence for sentence in found.unknown)

    def test_a_branch_to_a_net_that_cannot_be_computed(self, fan_of: FanOf):
        # Anywhere between ground and the reference: from nothing to 5.25 V over 1 kohm.
        found = load(fan_of(R20="R20 VREF SW 1k tol=0"))
        branch = dict(found.branches)["R20"].spread
        assert branch.minimum == pytest.approx(0, abs=6e-4)
        assert branch.maximum == pytest.approx(5.25e-3, rel=0.02)
        assert any("taken anywhere" in assumption for assumption in found.total.assumptions)

    def test_no_reference_pin(self, fan_of: FanOf):
        design = fan_of()
        part = design.netlist.parts["U1"]
        part.pins = tuple(p._replace(net="") if p.net == "VREF" else p for p in part.pins)
        fresh = Design(design.netlist)
        assert isinstance(fresh.reference_load(fresh.controllers[0]), Unsolved)
