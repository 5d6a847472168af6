"""Everything that is published of one build, as bytes by file name."""

from __future__ import annotations

from reportgen import __version__
from reportgen.model import BenchSheet, BuildResult, Comparison
from reportgen.physics.forecast import Forecast


def build_files(
    result: BuildResult,
    comparison: Comparison | None,
    baseline: BuildResult | None,
    bench: BenchSheet,
    forecast: Forecast | None,
) -> dict[str, bytes]:
    """Contents of every file of a build's folder.

    Raises
    ------
    OutputError
        A page could not be set without a complaint.
    """
    from reportgen.output.csv_tables import bands_csv, curves_csv
    from reportgen.output.documents import json_bytes, results_document
    from reportgen.pages.card import card_pictures, render_card_pdf
    from reportgen.pages.kit_words import kit_words
    from reportgen.pages.listing import (
        render_listing_html,
        render_listing_markdown,
        render_listing_text,
    )
    from reportgen.pages.report import render_report_html, render_report_pdf

    document = results_document(result, comparison, program_version=__version__, forecast=forecast)
    html = render_report_html(
        result,
        comparison=comparison,
        baseline=baseline,
        bench=bench,
        program_version=__version__,
        forecast=forecast,
    )
    pdf = render_report_pdf(
        result,
        comparison=comparison,
        baseline=baseline,
        bench=bench,
        program_version=__version__,
        forecast=forecast,
    )
    words = kit_words(result, bench, __version__)
    wide, square = card_pictures(words, bench.locale)
    return {
        "report.html": html.encode("utf-8"),
        "report.pdf": pdf,
        "results.json": json_bytes(document),
        "bands.csv": bands_csv(result),
        "curves.csv": curves_csv(result.chosen.curves, result.power_w),
        "card.pdf": render_card_pdf(words, bench, __version__),
        "card.png": wide,
        "card-square.png": square,
        "listing.md": render_listing_markdown(words),
        "listing.html": render_listing_html(words),
        "listing.txt": render_listing_text(words),
    }
