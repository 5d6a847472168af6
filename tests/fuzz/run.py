"""Fuzzing of one reader, led by the branches that it takes; see DEVELOPERS.md.

    python tests/fuzz/run.py TARGET [CORPUS] [options of libFuzzer]

TARGET is one of `targets.TARGETS`. CORPUS is a folder that keeps what was found worth keeping; it
is made where it is missing, and given the seeds. A failing input is written to the working folder.
"""

from __future__ import annotations

import hashlib
import sys
import tempfile
import warnings
from pathlib import Path

import atheris

with atheris.instrument_imports(include=["reportgen.intake", "tomllib"]):
    from seeds import seeds
    from targets import TARGETS

HERE = Path(__file__).parent
DICTIONARIES = {"touchstone": "touchstone.dict", "build": "sidecar.dict", "bench": "sidecar.dict"}


def main() -> None:
    target, *rest = sys.argv[1:]
    named = [word for word in rest if not word.startswith("-")]
    options = [word for word in rest if word.startswith("-")]
    corpus = Path(named[0] if named else tempfile.mkdtemp(prefix="corpus-"))
    corpus.mkdir(parents=True, exist_ok=True)
    for seed in seeds(target):
        (corpus / hashlib.sha1(seed).hexdigest()).write_bytes(seed)
    if dictionary := DICTIONARIES.get(target):
        options.append(f"-dict={HERE / dictionary}")
    limits = ["-timeout=10", "-rss_limit_mb=2048", "-max_len=4096"]
    warnings.simplefilter("error")
    atheris.Setup([sys.argv[0], str(corpus), *limits, *options], TARGETS[target])
    atheris.Fuzz()


if __name__ == "__main__":
    main()
