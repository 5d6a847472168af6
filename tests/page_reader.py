"""Pages of the sample results, and a reader that takes a page apart."""

import re
from dataclasses import replace
from html.parser import HTMLParser

import result_samples as samples
from sure_samples import sure

from reportgen.output.documents import results_document, rounded
from reportgen.pages.index import render_index_html
from reportgen.pages.report import render_report_html
from reportgen.published import published_build

VOID = {"meta", "img", "br", "link", "input", "hr", "path", "use"}


class Page(HTMLParser):
    """A page taken apart: its text without style sheets, its elements, unbalanced tags."""

    def __init__(self, source: str) -> None:
        super().__init__(convert_charrefs=True)
        self.words: list[str] = []
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.open: list[str] = []
        self.feed(source)
        self.close()
        self.text = re.sub(r"\s+", " ", " ".join(self.words))

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        if not {"style", "svg", "script"} & set(self.open):
            self.words.append(data)

    def all(self, tag: str) -> list[dict[str, str | None]]:
        return [attributes for name, attributes in self.elements if name == tag]


BASELINE = samples.full(1.2, "Birch", "birch")
CASES = {
    "full": (samples.full(), BASELINE, False),
    "judged": (samples.full(u95=0.03), BASELINE, True),
    "sure": (sure(), BASELINE, True),
    "load only": (samples.load_only(), BASELINE, False),
    "partial": (samples.partial(), None, False),
    "hostile": (samples.hostile(), None, False),
    "no band": (
        replace(samples.load_only(), chosen=replace(samples.load_only().chosen, bands=())),
        None,
        False,
    ),
}


def report(name: str, bench=samples.BENCH) -> str:
    result, baseline, judged = CASES[name]
    comparison = baseline and samples.comparison(result, baseline, judged=judged)
    return render_report_html(
        result, comparison=comparison, baseline=baseline, bench=bench, program_version="1.2.3"
    )


def published(result, comparison=None):
    """A result as its `results.json` tells it."""
    document = results_document(result, comparison, program_version="1.2.3")
    return published_build(rounded(document))


def index(**changes) -> str:
    results = [samples.full(), BASELINE, samples.partial(), samples.load_only(), samples.hostile()]
    rows = [
        published(one, None if one is BASELINE else samples.comparison(one, BASELINE))
        for one in results
    ]
    settings = {
        "bench": samples.BENCH,
        "failed": samples.FAILED,
        "standing": ["elder"],
        "findings": samples.FINDINGS,
        "baseline_key": "birch",
        "program_version": "1.2.3",
    } | changes
    return render_index_html(settings.pop("rows", rows), **settings)
