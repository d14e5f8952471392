"""Laws of plant sheets: whatever the case, elements, charge and mass close exactly."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from tests.unit.plants import case_at, sheet_at
from yieldnet.chemistry.bases import base_names
from yieldnet.foundation.errors import InputError
from yieldnet.plant.plant import plant_case

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.model.case import Case
    from yieldnet.plant.sheet import PlantSheet

ACIDS = ("lactate", "succinate", "acetate", "citrate", "propionate")
FEEDS = {
    "ammonia": ("ammonia", "ammonium sulfate"),
    "urea": ("urea",),
    "nitrate": ("sodium nitrate", "nitric acid"),
}


@st.composite
def _case(draw: st.DrawFn) -> str:
    """An elemental case of one settled equation with a plant of any kind."""
    product = draw(st.sampled_from(ACIDS))
    other = draw(st.sampled_from([name for name in (*ACIDS, "ethanol") if name != product]))
    source = draw(st.sampled_from(sorted(FEEDS)))
    feed = draw(st.sampled_from(FEEDS[source]))
    base = draw(st.sampled_from(base_names()))
    ph = draw(st.integers(min_value=30, max_value=80))
    amounts = [draw(st.integers(min_value=1, max_value=8)) for _ in range(3)]
    ash = draw(st.integers(min_value=0, max_value=12))
    purity = draw(st.integers(min_value=50, max_value=100))
    recovery = draw(st.integers(min_value=40, max_value=100))
    air = draw(st.sampled_from(["", "  productivity: 1 g/L/h\n  aeration: {vvm: 2}\n"]))
    return (
        f"case: t\ncompounds:\n  biomass: {{formula: CH1.8O0.5N0.2, ash: {ash / 100}}}\n"
        f"equation: glucose + ? {source} + ? oxygen -> {amounts[0]}/10 biomass +"
        f" {amounts[1]}/20 {product} + {amounts[2]}/40 {other}\n"
        "either side: [carbon dioxide, water]\n"
        f"plant:\n  product: {product}\n  output: 1234 t/y\n  on-stream: 7777 h/y\n"
        f"  recovery: {recovery} %\n  feedstock purity: {{glucose: {purity} %}}\n"
        f"  pH: {ph / 10}\n  base: {base}\n  nitrogen feed: {feed}\n{air}"
    )


def _answered(case: Case) -> tuple[PlantSheet | None, list[str]]:
    """Sheet of a case, or the codes with which it is refused."""
    try:
        return plant_case(case), []
    except InputError as refused:
        return None, [item.code for item in refused.findings]


@given(text=_case())
@settings(
    max_examples=60,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
def test_streams_of_any_case_close(tmp_path: Path, text: str) -> None:
    case = case_at(tmp_path, text)
    sheet, codes = _answered(case)
    if sheet is None:
        # Nitrate may take up more protons than the acids give off; that is refused by name.
        assert codes == ["YN918"]
        assert "sodium nitrate" in text
        return
    assert {item.residual for item in sheet.balances} == {0}
    assert sum(item.charge_per_h for item in sheet.ions) == 0
    assert sheet.stream(f"{sheet.plant.product}, sold").t_per_y == 1234
    enters = sum(item.t_per_y for item in sheet.streams if item.enters)
    leaves = sum(item.t_per_y for item in sheet.streams if not item.enters)
    assert enters == leaves
    # The ions are the acids made, base and feed less what became water, gas and biomass.
    acids = sum(
        item.kg_per_h
        for item in sheet.streams
        if item.name.split(",", maxsplit=1)[0] in ACIDS and not item.enters
    )
    held = sheet.stream("ions of base and feed, less the protons they replace").kg_per_h
    assert sum(item.kg_per_h for item in sheet.ions) == acids + held


@given(ph=st.integers(min_value=30, max_value=79), product=st.sampled_from(ACIDS))
@settings(
    max_examples=20, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
def test_a_higher_ph_needs_more_base_and_moves_nothing_else(
    tmp_path: Path, ph: int, product: str
) -> None:
    def sheet_of(value: int) -> dict[str, Fraction]:
        text = (
            f"case: t\nequation: glucose + ? oxygen -> 1/2 {product}\n"
            f"either side: [carbon dioxide, water]\nplant:\n  product: {product}\n"
            f"  output: 100 t/y\n  on-stream: 8000 h/y\n  base: ammonia\n  pH: {value / 10}\n"
        )
        return {item.name: item.kg_per_h for item in sheet_at(tmp_path, text).streams}

    low, high = sheet_of(ph), sheet_of(ph + 1)
    assert low.pop("ammonia") < high.pop("ammonia")
    held = "ions of base and feed, less the protons they replace"
    assert low.pop(held) < high.pop(held)
    assert low == high
