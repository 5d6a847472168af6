"""One folder per mistake under `bad_runs/`; here stands every sentence that it must give.

A sentence is: severity, place, what was found and expected, and behind the bar what to do.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from reportgen.errors import InputRejected
from reportgen.intake.builds import open_runs, read_build
from reportgen.model import Finding

BAD_RUNS = Path(__file__).parent / "bad_runs"

SENTENCES = {
    "bench-file-below-top": [
        "warning: alder/runs.toml: "
        "a runs.toml below the top of the runs folder is not read"
        " | move it up, or remove it",
    ],
    "coarse-sweep": [
        "warning: wide.s1p: "
        "fewer than 5 points in a band: 160 m has 0, 80 m has 0, 60 m has 0, 40 m has 1, 30 "
        "m has 0, 20 m has 1"
        " | figures there rest on interpolation; sweep more points or the band alone",
    ],
    "empty-sweep": [
        "error: a-short.s1p: "
        "the file is empty (0 bytes)"
        " | save the sweep again",
    ],
    "file-of-another-build": [
        "error: build.toml: sweep[2].file: "
        '"birch/a-short.s1p" belongs to another build or was passed over'
        " | move the file here",
    ],
    "file-outside": [
        "error: build.toml:6: sweep[1].file: "
        'found "../a-open.s1p": `..` leads out of the folder'
        " | name a file inside the build folder, with forward slashes: raw/a-load.s1p",
        "error: build.toml:9: sweep[2].file: "
        'found "/tmp/a.s1p": it begins at the root of the file system'
        " | name a file inside the build folder, with forward slashes: raw/a-load.s1p",
        "error: build.toml:12: sweep[3].file: "
        'found "C:/a.s1p": it begins with a drive letter'
        " | name a file inside the build folder, with forward slashes: raw/a-load.s1p",
        "error: build.toml:15: sweep[4].file: "
        'found "raw\\\\a.s1p": it holds a backslash'
        " | name a file inside the build folder, with forward slashes: raw/a-load.s1p",
        "error: build.toml:18: sweep[5].file: "
        'found "~/a.s1p": it begins with `~`'
        " | name a file inside the build folder, with forward slashes: raw/a-load.s1p",
        "error: build.toml:21: sweep[6].file: "
        'found "https://example.org/a.s1p": it is an address, not a file'
        " | name a file inside the build folder, with forward slashes: raw/a-load.s1p",
    ],
    "later-schema": [
        "error: build.toml:1: schema: "
        "found 2, expected 1"
        " | correct the value",
    ],
    "latin-1-sidecar": [
        "error: build.toml:1: "
        "found the byte 0xb5, expected UTF-8"
        " | save the file as UTF-8",
    ],
    "load-not-named": [
        "error: build.toml:5: sweep[1].load: "
        'missing, and there is more than one load: expected "main" or "second"'
        " | say which load this sweep belongs to",
    ],
    "measured-before-calibration": [
        "warning: build.toml: measured_on: "
        "measured on 2026-10-03, before the calibration evening of 2026-10-04"
        " | correct the date",
    ],
    "misnamed-sidecar": [
        "error: alder: "
        "the folder has 1 sweep file and no build.toml"
        " | rename Build.toml to build.toml",
    ],
    "missing-sweep": [
        "error: build.toml: sweep[2].file: "
        'the file "a-shrt.s1p" is not there'
        ' | did you mean "a-short.s1p"?',
        "warning: a-short.s1p: "
        "no [[sweep]] in build.toml names this file; it is not used"
        " | add a [[sweep]] for it, or move it away",
    ],
    "misspelt-keys": [
        "error: build.toml: name: "
        "missing, expected a text of 1 to 120 characters"
        " | add `name`",
        "error: build.toml: winding: "
        "missing, expected a table [winding]"
        " | add `winding`",
        "error: build.toml:1: nmae: "
        'unknown key "nmae"'
        " | did you mean `name`?",
        "error: build.toml:2: windings: "
        'unknown key "windings"'
        " | did you mean `winding`?",
        "error: build.toml:4: core.height_mm: "
        "missing, expected a number of millimetres above 0"
        " | add `height_mm`",
        "error: build.toml:7: core.hight_mm: "
        'unknown key "hight_mm"'
        " | did you mean `height_mm`?",
    ],
    "more-out-than-in": [
        "warning: a-short.s1p: "
        "more power out than in: |S11| reaches 1.0200 at 7 MHz, too much at 5 of 5 points"
        " | check the calibration and the load's value",
    ],
    "no-load-defined": [
        "error: build.toml:5: sweep[1].load: "
        "missing, and no load is defined"
        " | define it in build.toml or runs.toml, under [loads.main]",
    ],
    "no-sidecar": [
        "error: birch: "
        "the folder has 2 sweep files and no build.toml"
        " | write one: `reportgen sidecar` gives a start from the sweeps in birch",
    ],
    "no-sweep-left": [
        "error: build.toml: sweep[1].file: "
        'the file "a.s1p" is not there'
        " | put it back, or remove its entry",
        "error: build.toml: "
        "no sweep of a unit is left to be used"
        " | correct the sweeps named above or add one",
    ],
    "no-sweep-named": [
        "error: build.toml: sweep: "
        "no [[sweep]] is named"
        " | add a [[sweep]] for each file",
    ],
    "not-toml": [
        "error: build.toml:3: "
        "not valid TOML (column 15): something stands behind the value"
        " | correct this line: text stands in quotes, numbers take a point and no unit",
    ],
    "not-used-yet": [
        "note: screen.csv: "
        "spot readings are not part of the figures in this version"
        " | ",
        "note: warmup.csv: "
        "temperature logs are not part of the figures in this version"
        " | ",
    ],
    "only-checks": [
        "error: build.toml: "
        "no sweep of a unit is left to be used"
        " | correct the sweeps named above or add one",
    ],
    "own-bands-wrong": [
        "error: runs.toml:2: own_band[1].name: "
        'the name "40 m" is taken by a built-in band'
        " | give the band another name",
        "error: runs.toml:4: own_band[1].to_mhz: "
        "found 7, expected more than from_mhz = 7.3"
        " | exchange the two edges",
        "error: runs.toml:10: own_band[3].name: "
        'the name "coast" is taken by own_band[2]'
        " | give the band another name",
    ],
    "ports-reversed": [
        "warning: pair.s2p: "
        "S21 is zero, S12 is not: ports reversed?"
        " | set `reverse_ports = true` for this sweep if so",
    ],
    "quoted-number": [
        "error: runs.toml:2: loads.main.resistance_ohm: "
        'found "2k4", expected a number of ohms above 0'
        " | write the bare number, without quotes and without a unit",
        "error: runs.toml:3: loads.main.stray_pf: "
        'found "fitted", expected "fit" or a number of picofarads from -50 up to 1000'
        " | write the bare number, without quotes and without a unit",
    ],
    "reset-clock": [
        "warning: build.toml: measured_on: "
        "the date 2006-01-01 looks like a reset clock"
        " | correct the date",
    ],
    "ring-inside-out": [
        "error: build.toml:7: core.inner_mm: "
        "found 36, expected less than outer_mm = 23"
        " | exchange the two diameters or measure again",
    ],
    "same-file-twice": [
        "error: build.toml:9: sweep[2].file: "
        '"a-open.s1p" is named by sweep[1] already'
        " | name each file once",
    ],
    "same-table-twice": [
        "error: build.toml:5: "
        "not valid TOML (column 9): the table is given twice"
        " | correct this line: text stands in quotes, numbers take a point and no unit",
    ],
    "units-wrong": [
        "error: build.toml:8: sweep[1].units: "
        'found "A" twice, expected two different units'
        " | name both units of the pair",
        "error: build.toml:12: sweep[2].unit: "
        'a sweep of set-up "back-to-back" has two units'
        ' | write units = ["A", "B"], the one on port 1 first, in place of `unit`',
        "error: build.toml:16: sweep[3].units: "
        'a sweep of set-up "open" has one unit'
        ' | write unit = "A" in place of it',
    ],
    "unknown-band": [
        "error: runs.toml:1: bands[1]: "
        'no band is named "40m"'
        ' | did you mean "40 m"?',
        "error: runs.toml:2: limits.al: "
        'no band is named "al"'
        ' | did you mean "all"?',
        'error: runs.toml:4: limits."4O m": '
        'no band is named "4O m"'
        ' | did you mean "40 m"?',
        'error: runs.toml:5: limits."4O m".swr: '
        "found 1, expected a number above 1 and up to 100"
        " | correct the value",
    ],
    "unknown-baseline": [
        "error: runs.toml: baseline: "
        'no build has the key "aldr"'
        ' | did you mean "alder"?',
    ],
    "unknown-load": [
        "error: build.toml:8: sweep[1].load: "
        'no load is named "mein"'
        ' | did you mean "main"?',
        "error: build.toml:9: sweep[1].calibration: "
        'no calibration is named "evenin"'
        ' | did you mean "evening"?',
    ],
    "unnamed-sweep": [
        "warning: a-short.s1p: "
        "no [[sweep]] in build.toml names this file; it is not used"
        " | add a [[sweep]] for it, or move it away",
    ],
    "wrong-ports": [
        "error: pair-ab.s2p: sweep[2].setup: "
        'the sweep has 2 ports, set-up "load" has 1'
        " | correct `setup` or `file` in build.toml",
    ],
}


def all_findings(root: Path) -> list[Finding]:
    try:
        runs = open_runs(root)
    except InputRejected as rejected:
        return list(rejected.findings)
    found = list(runs.findings)
    for folder in runs.folders:
        try:
            found += read_build(runs, folder).findings
        except InputRejected as rejected:
            found += rejected.findings
    return found


def sentence(finding: Finding) -> str:
    line = f":{finding.line}" if finding.line else ""
    key = f": {finding.key}" if finding.key else ""
    place = f"{finding.severity}: {finding.file}{line}{key}"
    return f"{place}: {finding.message} | {finding.remedy}"


@pytest.mark.parametrize("case", SENTENCES)
def test_every_mistake_is_told_in_these_words(case: str) -> None:
    assert [sentence(finding) for finding in all_findings(BAD_RUNS / case)] == SENTENCES[case]


def test_every_folder_has_its_sentences() -> None:
    assert {folder.name for folder in BAD_RUNS.iterdir()} == set(SENTENCES)
