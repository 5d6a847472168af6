"""Several builds on common axes: efficiency and SWR over frequency, heat by band.

Each build has a colour, a dash or a marker, and its name beside its curve.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reportgen.model import Band, BuildResult
from reportgen.pages.canvas import Chart, name_in_chart
from reportgen.pages.versus_curves import draw_efficiencies, draw_swrs
from reportgen.pages.versus_heat import draw_heats


def draw_versus(
    results: Sequence[BuildResult],
    names: Sequence[str],
    bands: Sequence[Band],
    *,
    swr_limits: Mapping[str, float],
    efficiency_limits: Mapping[str, float],
    locale: str,
) -> dict[str, Chart]:
    """All charts that the builds allow, by name: `efficiency`, `swr`, `heat`.

    `names` are the builds' names, each different; heat is at the power of the first [W].
    """
    drawn = (
        draw_efficiencies(results, names, bands, efficiency_limits, locale),
        draw_swrs(results, names, bands, swr_limits, locale),
        draw_heats(results, names, bands, locale),
    )
    return {chart.name: chart for chart in drawn if chart is not None}


def chart_names(results: Sequence[BuildResult]) -> list[str]:
    """A name for each build that is different from all others and can be drawn."""
    found: list[str] = []
    for place, result in enumerate(results, start=1):
        name = name_in_chart(result.build.sheet.name) or f"build {place}"
        found.append(f"{name[:10]} ({place})" if name in found else name)
    return found


def bands_of(results: Sequence[BuildResult]) -> list[Band]:
    """Every band that some build was asked about, by frequency."""
    found = {band.band for result in results for band in result.chosen.bands}
    return sorted(found, key=lambda band: (band.from_hz, band.to_hz, band.name))
