"""Where fuzzing starts: small files of every kind, of our own making and of the grammar.

Each begins with the byte that chooses the settings; see `targets`.
"""

from __future__ import annotations

from pathlib import Path

EXAMPLES = Path(__file__).parents[2] / "example_runs"

ONE_PORT = b"! simulated\n# MHz S RI R 50\n1.5 0.1 0.2\n7.1 0.11 -0.2\n14 -.3 4e-1\n"
TWO_PORT = b"# GHz S MA R 50\n0.001 .1 10 .9 -20 .9 -20 .1 5\n0.01 .2 0 .8 1 .8 1 .2 -5\n"
DECIBELS = (
    b"#Hz S DB R75 ! glued\r\n1e6 -20 0 -1 5 -1 5 -20 -180\r\n2e6 -20 0 -inf 0 -1 5 -20 1\r\n"
)
IMPEDANCE = b"# kHz Z RI R 75\n1000 1 0.2\n2000 1.1D0 0.3\n"
WRAPPED = b"# MHz S RI R 50\n1 .1 0 .8 0\n.8 0 .1 0\n2 .1 0 .8 0\n.8 0 .1 0\n"
NOISE = b"# MHz S RI R 50 75\n1 .1 0 .8 0 .8 0 .1 0\n2 .1 0 .8 0 .8 0 .1 0\n1 .7 .6 69 .3\n"
COMMA = b"# MHz S RI R 50\n1,0;0,1;0,2\n2,0;0,1;0,2\n"
ONE_PATH = b"# MHz S RI R 50\n1 .1 0 .8 0 0 0 0 0\n2 .1 0 .8 0 0 0 0 0\nEND\n"
FALLING = b"!Port Impedance 7\n# MHz S RI R 50\n3 0 0\n2 0 0\n2 nan 0\n1 0 0\n\x1a"
VERSION_TWO = (
    b"[Version] 2.0\n# MHz S RI R 50\n[Number of Ports] 2\n[Two-Port Data Order] 12_21\n"
    b"[Number of Frequencies] 1\n[Number of Noise Frequencies] 1\n[Reference] 50 75\n"
    b"[Matrix Format] Lower\n[Begin Information]\nx\n[End Information]\n[Network Data]\n"
    b"1 .1 0 .8 0 .1 0\n[Noise Data]\n1 .7 .6 69 .3\n[End]\n"
)

SPOT = b"frequency_mhz,through_loss_db\n7.1,1.2\n7.15,-0.4\n14.2,1e0\n\n"
LOG = b"time_s,note,core_c,ambient_c\n0,on,21.5,21\n60,,30,21\n120,off,35,21.2\n"

MADE_UP = {
    "touchstone": (
        b"\x00" + ONE_PORT, b"\x01" + TWO_PORT, b"\x01" + DECIBELS, b"\x00" + IMPEDANCE,
        b"\x5b" + WRAPPED, b"\x01" + NOISE, b"\x1e" + COMMA, b"\x2e" + ONE_PATH,
        b"\x5a" + FALLING, b"\x02" + VERSION_TWO, b"\x01" + VERSION_TWO.replace(b"Lower", b"Full"),
        b"\x02" + ONE_PORT.decode().encode("utf-16"),
    ),
    "spot": (b"\0" + SPOT, b"\0\xef\xbb\xbf" + SPOT.replace(b"\n", b"\r\n")),
    "log": (b"\0" + LOG, b"\0" + LOG.replace(b",", b", ").replace(b"35", b"1e1")),
    "build": (),
    "bench": (
        b'\0title = "x"\nbaseline = "alder"\nregion = 2\nbands = ["40 m"]\npower_w = 60\n'
        b'paper = "Letter"\nlocale = "de"\n[limits.all]\nswr = 2.0\n[limits."40 m"]\n'
        b'efficiency_percent = 85\n[[own_band]]\nname = "Coast"\nfrom_mhz = 4.0\nto_mhz = 4.4\n'
        b'[duty]\n"voice" = 50\n[calibrations.evening]\ngrade = "bench"\n'
        b"performed_on = 2026-10-04\nnoise_db = 80\n[loads.main]\nresistance_ohm = 3185\n"
        b'stray_pf = "fit"\n[loads."two"]\nresistance_ohm = 50.0\nstray_pf = -1\nbody_pf = 0\n',
    ),
}  # fmt: skip


def seeds(target: str) -> tuple[bytes, ...]:
    """Files to begin with, the made-up ones first."""
    return (*MADE_UP[target], *(b"\0" + data for data in _from_examples(target)))


def _from_examples(target: str) -> list[bytes]:
    if target == "build":
        return [file.read_bytes() for file in sorted(EXAMPLES.rglob("build.toml"))]
    if target == "bench":
        return [(EXAMPLES / "runs.toml").read_bytes()]
    return []
