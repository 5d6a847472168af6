"""Pages opened in a browser, with what they ask for and complain of, and measured there."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

MEASURES = (Path(__file__).parent / "measure_page.js").read_text("utf-8")
TALL = 900


@dataclass
class Opened:
    """A page in the browser."""

    page: Any
    asked_for: list[str] = field(default_factory=list)
    complaints: list[str] = field(default_factory=list)

    def show(self, width: int = 1280, media: str = "screen", scheme: str = "light") -> None:
        """Set the page anew for a window, or for paper."""
        self.page.set_viewport_size({"width": width, "height": TALL})
        self.page.emulate_media(media=media, color_scheme=scheme)

    def measure(self, what: str) -> Any:
        """What `measure_page.js` finds."""
        return self.page.evaluate(f"measures.{what}()")


def is_whole(path: Path) -> bool:
    """A page, and not a piece to be pasted into one."""
    return path.read_text("utf-8").startswith("<!doctype html>")


def pasted(piece: Path, into: Path) -> Path:
    """A page of somebody else's with a piece pasted into it."""
    page = into / f"{piece.parent.name}.html"
    page.write_text(
        '<!doctype html><html lang="en"><head><meta charset="utf-8"><title>Kit</title>'
        '<meta name="viewport" content="width=device-width, initial-scale=1"></head>'
        f"<body><main><h1>Kit</h1>{piece.read_text('utf-8')}</main></body></html>",
        "utf-8",
    )
    return page


def open_page(context: Any, path: Path) -> Opened:
    """A page once its letters are there; listened to from the start."""
    opened = Opened(page=context.new_page())
    opened.page.on("request", lambda request: opened.asked_for.append(request.url))
    opened.page.on("console", lambda message: opened.complaints.append(message.text))
    opened.page.on("pageerror", lambda error: opened.complaints.append(str(error)))
    opened.page.goto(path.as_uri())
    opened.page.evaluate("document.fonts.ready.then(() => true)")
    opened.page.evaluate(f"window.measures = {MEASURES}")
    return opened
