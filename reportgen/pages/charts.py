"""Charts of one build: efficiency and match over frequency, heat by band, permeability, warm-up.

Each is drawn twice from the same numbers: wide for pages and paper, narrow for a phone.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reportgen.model import Band, BuildResult
from reportgen.pages.canvas import Chart
from reportgen.pages.capacitor_chart import draw_capacitors
from reportgen.pages.curve_charts import draw_efficiency, draw_match
from reportgen.pages.heat_chart import draw_heat
from reportgen.pages.permeability_chart import draw_permeability
from reportgen.pages.warm_up_chart import draw_warm_up
from reportgen.physics.forecast import CapacitorForecast

__all__ = [
    "Chart",
    "draw_capacitors",
    "draw_charts",
    "draw_efficiency",
    "draw_heat",
    "draw_match",
    "draw_permeability",
    "draw_warm_up",
]


def draw_charts(
    result: BuildResult,
    baseline: BuildResult | None,
    bands: Sequence[Band],
    *,
    swr_limits: Mapping[str, float],
    efficiency_limits: Mapping[str, float],
    capacitor: CapacitorForecast | None = None,
    locale: str = "en",
) -> dict[str, Chart]:
    """All charts that the result allows, by name.

    They are `efficiency`, `match`, `heat`, `permeability`, `warm-up` and `capacitors`.

    The limits [ratio] are those of the bands that have one; the baseline is drawn where it is
    given.
    """
    drawn = (
        draw_efficiency(result, baseline, bands, limits=efficiency_limits, locale=locale),
        draw_match(result, baseline, bands, limits=swr_limits, locale=locale),
        draw_heat(result, baseline, locale=locale),
        draw_permeability(result, bands, locale=locale),
        draw_warm_up(result, locale=locale),
        None if capacitor is None else draw_capacitors(capacitor, locale=locale),
    )
    return {chart.name: chart for chart in drawn if chart is not None}
