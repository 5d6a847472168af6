"""The pictures of the README: `python tests/draw_readme_pictures.py`, with Chromium installed.

Publishes the example runs into a folder that is let go, and takes the top of a report, the index
and a card.
"""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path
from tempfile import TemporaryDirectory

from PIL import Image

ROOT = Path(__file__).parents[1]
PICTURES = ROOT / ".pictures"
SHOWN = "birch"
WIDTH = 1000
HEIGHTS = {"report": 1420, "index": 1330}
LARGEST_BYTES = 300_000


def publish(out: Path) -> None:
    """Every page of the example runs."""
    command = ["-m", "reportgen", "publish", str(ROOT / "example_runs"), "--out", str(out)]
    subprocess.run([sys.executable, *command], check=True, cwd=ROOT)


def take(page: Path, name: str) -> None:
    """A picture of the top of a page."""
    browser = shutil.which("chromium") or shutil.which("chromium-browser")
    if browser is None:
        raise SystemExit("Chromium is not installed: apt-get install chromium")
    options = ["--headless", "--no-sandbox", "--hide-scrollbars", "--force-color-profile=srgb"]
    window = f"--window-size={WIDTH},{HEIGHTS[name]}"
    picture = f"--screenshot={PICTURES / name}.png"
    subprocess.run(
        [browser, *options, window, picture, page.as_uri()], check=True, capture_output=True
    )
    keep(PICTURES / f"{name}.png", name)


def keep(source: Path, name: str) -> None:
    """A picture in few colours."""
    picture = PICTURES / f"{name}.png"
    with Image.open(source) as image:
        few = image.convert("RGB").quantize(200, dither=Image.Dither.NONE)
    few.save(picture, optimize=True)
    if picture.stat().st_size > LARGEST_BYTES:
        raise SystemExit(f"{picture} is larger than {LARGEST_BYTES} bytes")


def main() -> None:
    """Publish, and take the pictures."""
    PICTURES.mkdir(exist_ok=True)
    with TemporaryDirectory() as folder:
        out = Path(folder) / "published"
        publish(out)
        take(out / SHOWN / "report.html", "report")
        take(out / "index.html", "index")
        keep(out / SHOWN / "card.png", "card")


if __name__ == "__main__":
    main()
