"""A few chosen builds on one page: found, measured, compared with the first, drawn, placed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np

from reportgen import __version__
from reportgen.errors import InputRejected, NotMeasurable, UsageError
from reportgen.intake.builds import BuildFolder, Runs, read_build
from reportgen.model import BuildResult, Finding
from reportgen.output.documents import results_document, rounded
from reportgen.output.own_page import pdf_beside, place_page, refuse_foreign
from reportgen.pages.versus import render_versus
from reportgen.pages.versus_tables import Rival
from reportgen.physics.compare import compare
from reportgen.physics.measure import measure_build
from reportgen.pipeline import find_build
from reportgen.published import published_build

FEWEST, MOST = 2, 6
_SHUFFLE = 20_261_004
"""Any number, always the same: it only has to part draws that are no common ones."""


def write_versus(folders: Sequence[Path], out: Path) -> tuple[Path, Path]:
    """A page of builds on common axes, and the same as PDF; the first is what others meet.

    Bands, limits and words are those of the first build's runs folder; calibrations and loads are
    each build's own.

    Raises
    ------
    UsageError
        Too few or too many builds, one named twice, or something foreign in the place of the page.
    InputRejected, NotMeasurable
        Nothing can be computed from one of them.
    OutputError
        The pages cannot be written.
    """
    if not FEWEST <= len(folders) <= MOST:
        raise UsageError(f"found {len(folders)} builds, expected {FEWEST} to {MOST}")
    refuse_foreign(out)
    found = [find_build(folder) for folder in folders]
    places = [(runs.root / folder.folder).resolve() for runs, folder in found]
    if len(set(places)) < len(places):
        raise UsageError("a build is named twice; name each once")
    first = found[0][0]
    results = [_measured(first, *one) for one in found]
    rivals = [_rival(place, result, results[0]) for place, result in enumerate(results)]
    html, pdf = render_versus(
        rivals,
        bench=first.bench,
        roots=len({runs.root.resolve() for runs, _ in found}),
        program_version=__version__,
    )
    place_page(out, html.encode("utf-8"), pdf)
    return out, pdf_beside(out)


def _measured(first: Runs, runs: Runs, folder: BuildFolder) -> BuildResult:
    """One build under the settings of the first."""
    bench = replace(first.bench, calibrations=runs.bench.calibrations, loads=runs.bench.loads)
    try:
        result = measure_build(read_build(runs, folder), bench, first.bands)
    except InputRejected as rejected:
        raise InputRejected(_placed(rejected, folder)) from rejected
    except NotMeasurable as error:
        raise NotMeasurable(f"{folder.folder}: {error}") from error
    same = runs.root.resolve() == first.root.resolve()
    return result if same else _with_draws_of_its_own(result)


def _placed(rejected: InputRejected, folder: BuildFolder) -> tuple[Finding, ...]:
    """What is wrong with one of the builds, its folder named."""
    return tuple(
        replace(one, file=f"{folder.folder}/{one.file}" if one.file else folder.folder)
        for one in rejected.findings
    )


def _with_draws_of_its_own(result: BuildResult) -> BuildResult:
    """Draws are common by the names of calibrations; those of another bench only bear the name."""
    random = np.random.default_rng(_SHUFFLE)
    draws = result.loss_draws_db
    order = random.permutation(len(next(iter(draws.values()), ())))
    return replace(result, loss_draws_db={band: one[order] for band, one in draws.items()})


def _rival(place: int, result: BuildResult, reference: BuildResult) -> Rival:
    comparison = compare(result, reference) if place else None
    document = results_document(result, comparison, program_version=__version__)
    published = replace(published_build(rounded(document)), key=str(place))
    return Rival(result=result, comparison=comparison, published=published)
