"""A runs folder made to do harm: payloads in every text, and in every name that a file can have."""

from __future__ import annotations

import json
import os
import pickle
from pathlib import Path

from small_runs import SWEEP

MARK = "zq7"
BASELINE = "zq7-7-7"
FOLDERS = ("<zq7 zq8=1 onclick=zq()>", "=zq7,'\"{{7*7}}")
UNSEEN = "\u202e\u200b\u0007\u001b[31m\u0085"
FORMULA = '=HYPERLINK("http://127.0.0.1","x")'


class Canary:
    """A pickle that makes a file when it is loaded."""

    def __init__(self, path: Path) -> None:
        self.path = path

    def __reduce__(self) -> tuple[object, tuple[Path]]:
        return Path.touch, (self.path,)


def text_payload(port: int, local_file: Path) -> str:
    """Up to 2000 characters that run, fetch, embed or hide where a page takes them for more."""
    here = f"http://127.0.0.1:{port}"
    return (
        f'{FORMULA}"><zq7 zq8="1">x</zq7><img src="{here}/img" onerror="zq()">'
        f"<script>zq()</script><svg onload='zq()'><image href=\"{here}/svg\"/></svg>"
        f'<link rel="stylesheet" href="{here}/css"><link rel=attachment href="{here}/attachment">'
        f'<link rel="attachment" href="{local_file.as_uri()}"><a href="javascript:zq()">x</a>'
        f"<iframe src={local_file.as_uri()}></iframe><object data={here}/object></object>"
        f"<style>@import url({here}/import); body {{ background: url({here}/url) }}</style>"
        "</style></title></textarea></script><!-- --><base href=//zq7.example>"
        f"{{{{ 7*7 }}}}{{% raw %}}{{# x #}}${{7*7}}<%= 7*7 %>$\\frac{{1}}{{0}}$ $ "
        f"' onmouseover='zq()' x=' ![x]({here}/markdown) [x](javascript:zq()) {UNSEEN}&#60;zq7&#62;"
    )


def name_payload(port: int) -> str:
    """The same in 120 characters."""
    image = f"<img src=//127.0.0.1:{port}/n onerror=zq()>"
    return f"=zq7\"><zq7 zq8=1>{image}'{{{{7*7}}}}$x$\u202e\u0007"


def write_hostile_runs(root: Path, port: int, local_file: Path, canary: Path) -> Path:
    """Two builds that can be published, one that cannot, and what should not lie there at all."""
    text, name = text_payload(port, local_file), name_payload(port)
    root.mkdir(parents=True)
    (root / "runs.toml").write_text(_bench(name), "utf-8")
    # a folder's name may hold anything but a slash
    for folder, words in zip(FOLDERS, (text, name), strict=True):
        _write_build(root / folder, name, words)
    broken = root / "broken <zq7 zq8=1>"
    broken.mkdir()
    (broken / "build.toml").write_text(
        f"name = {_toml(name)}\n{_toml(name)} = {_toml(text)}\n"
        f"[winding]\nlow_turns = {_toml(text)}\n",
        "utf-8",
    )
    _write_what_does_not_belong(root, canary)
    return root


def _bench(name: str) -> str:
    return f"""title = {_toml(name)}
publisher = {_toml(name)}
baseline = "{BASELINE}"
bands = [{_toml(name)}, "40 m"]
locale = {_toml('"><zq7 zq8=1>')}
[[own_band]]
name = {_toml(name)}
from_mhz = 7.01
to_mhz = 7.15
[duty]
{_toml(name)} = 50
[limits.{_toml(name)}]
swr = 1.5
[calibrations.{_toml(name)}]
[loads.{_toml(name)}]
resistance_ohm = 3200
"""


def _write_build(folder: Path, name: str, text: str) -> None:
    folder.mkdir()
    file = 'a "><zq7 zq8=1> onload=zq().s1p'
    (folder / file).write_text(SWEEP + f"! {text}\n", "utf-8")
    (folder / "unnamed <zq7 zq8=1>.s1p").write_text(SWEEP)
    (folder / "build.toml").write_text(
        f"""name = {_toml(name)}
summary = {_toml(text)}
notes = {_toml(text)}
[winding]
low_turns = 3
high_turns = 24
[core]
outer_mm = 36
inner_mm = 23
height_mm = 15
material = {_toml(text)}
[rating]
enclosure = {_toml(text)}
[[sweep]]
file = {_toml(file)}
setup = "load"
unit = {_toml(name)}
load = {_toml(name)}
calibration = {_toml(name)}
[[part]]
name = {_toml(name)}
quantity = 2
note = {_toml(text)}
[record]
{_toml(name)} = {_toml(text)}
url = "javascript:zq()"
""",
        "utf-8",
    )


def _write_what_does_not_belong(root: Path, canary: Path) -> None:
    other = root / "other"
    other.mkdir()
    (other / "build.toml").write_text(
        'name = "Other"\n[winding]\nlow_turns = 3\nhigh_turns = 24\n'
        '[[sweep]]\nfile = "pickle.s2p"\nsetup = "direct"\n'
        '[[sweep]]\nfile = "link.s1p"\nsetup = "open"\n'
        '[[sweep]]\nfile = "pipe.s1p"\nsetup = "short"\n'
    )
    (other / "pickle.s2p").write_bytes(pickle.dumps(Canary(canary)))
    (other / "link.s1p").symlink_to("/etc/passwd")
    (other / "loop").symlink_to(root)
    os.mkfifo(other / "pipe.s1p")
    (other / os.fsdecode(b"caf\xe9 \x1b[31m.s1p")).write_text(SWEEP)
    (root / "\x1b]0;zq7\x07 \u202e.s1p").write_text(SWEEP)


def _toml(text: str) -> str:
    """A text as a basic string of TOML; those are the escapes of JSON as far as they go."""
    return json.dumps(text)
