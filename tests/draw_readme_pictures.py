"""The picture of the README: `python tests/draw_readme_pictures.py`, with Chromium installed.

Publishes the example runs into a folder that is let go, and takes the top of one report.
"""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path
from tempfile import TemporaryDirectory

from PIL import Image

ROOT = Path(__file__).parents[1]
PICTURE = ROOT / ".pictures" / "report.png"
SHOWN = "birch"
WIDTH, HEIGHT = 1000, 1420
LARGEST_BYTES = 300_000


def publish(out: Path) -> None:
    """The pages of the build that is shown, and of the index."""
    command = ["-m", "reportgen", "publish", str(ROOT / "example_runs"), "--out", str(out)]
    subprocess.run([sys.executable, *command, "--only", SHOWN], check=True, cwd=ROOT)


def take(page: Path, picture: Path) -> None:
    """A picture of the top of a page, in few colours."""
    browser = shutil.which("chromium") or shutil.which("chromium-browser")
    if browser is None:
        raise SystemExit("Chromium is not installed: apt-get install chromium")
    options = ["--headless", "--no-sandbox", "--hide-scrollbars", "--force-color-profile=srgb"]
    window = f"--window-size={WIDTH},{HEIGHT}"
    command = [browser, *options, window, f"--screenshot={picture}", page.as_uri()]
    subprocess.run(command, check=True, capture_output=True)
    with Image.open(picture) as image:
        few = image.convert("RGB").quantize(64, dither=Image.Dither.NONE)
    few.save(picture, optimize=True)


def main() -> None:
    """Publish, and take the picture."""
    PICTURE.parent.mkdir(exist_ok=True)
    with TemporaryDirectory() as folder:
        publish(Path(folder) / "published")
        take(Path(folder) / "published" / SHOWN / "report.html", PICTURE)
    if PICTURE.stat().st_size > LARGEST_BYTES:
        raise SystemExit(f"{PICTURE} is larger than {LARGEST_BYTES} bytes")


if __name__ == "__main__":
    main()
