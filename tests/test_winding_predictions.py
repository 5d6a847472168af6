"""What could be wound instead, against the workshop's limits."""

from dataclasses import replace

import heat_and_forecast_samples as heat
import result_samples as samples

from reportgen.model import Interval, Limits
from reportgen.pages.winding_predictions import promising_sentence, windings_table
from reportgen.physics.forecast import Forecast
from reportgen.physics.judge import predicted_misses
from reportgen.physics.outcomes import BandOutcome, Outcome

WINDING = (3, 24)


def exactly(value: float) -> Interval:
    return Interval(value=value, low95=value, high95=value)


def outcome(swr: float, loss_db: float) -> Outcome:
    """The SWR on 40 m, less on 80 m; the same loss on both."""
    bands = (("80 m", swr - 0.5), ("40 m", swr))
    return Outcome(
        load_ohm=3200,
        swr=exactly(swr),
        heat_loss_db=exactly(loss_db),
        bands=tuple(
            BandOutcome(band=name, swr=exactly(one), heat_loss_db=exactly(loss_db))
            for name, one in bands
        ),
    )


def bench(swr: float | None = None, percent: float | None = None):
    limits = {"all": Limits(swr=swr, efficiency_percent=percent)}
    return replace(samples.BENCH, limits=limits if swr or percent else {})


def forecast(now: Outcome, taller: Outcome, longer: Outcome) -> Forecast:
    """The build as it is, a taller stack, and other turns."""
    capacitor = replace(heat.capacitor(then=2.4), now=now, then=now)
    stack, turns = (
        replace(heat.winding(24, 2.0, stack=2), best_capacitor=one) for one in (taller, longer)
    )
    return replace(heat.forecast(), capacitor=capacitor, stacks=(stack,), turns=(turns,), ratios=())


NOW, GOOD, BAD = outcome(2.4, 0.8), outcome(1.8, 0.4), outcome(3.0, 0.3)


def test_a_prediction_is_held_to_both_limits() -> None:
    assert predicted_misses(NOW, bench(2.41, 83)) == ()  # 0.8 dB are 83.2 %
    assert predicted_misses(NOW, bench(2.39)) == ("40 m",)
    assert predicted_misses(NOW, bench(2.41, 83.3)) == ("80 m", "40 m")


def limits_column(at) -> list[str]:
    table = windings_table(forecast(NOW, GOOD, BAD), WINDING, at)
    return [row.cells[-1].text for group in table.groups for row in group]


def test_the_table_says_which_keep_and_without_limits_nothing() -> None:
    assert limits_column(bench(2.0)) == ["missed on 1 band", "missed on 2 bands", "kept"]
    assert limits_column(bench(100.0)) == ["kept"] * 3
    without = windings_table(forecast(NOW, GOOD, BAD), WINDING, bench())
    assert "Limits" not in [column.label for column in without.columns]


def test_the_sentence_names_what_keeps_where_the_build_does_not() -> None:
    found = forecast(NOW, GOOD, BAD)
    assert promising_sentence(found, WINDING, bench(100.0)) == ""
    assert promising_sentence(found, WINDING, bench()) == ""
    assert promising_sentence(found, WINDING, bench(1.1)) == (
        "No change below is predicted to keep to all limits."
    )
    words = promising_sentence(found, WINDING, bench(2.0)).replace("\u00a0", " ")
    assert words.startswith("To keep to all limits, wind ")
    assert words.count("stack of 2 rings") == 1
    assert "same ratio" not in words
