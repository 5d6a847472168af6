"""Contents of made-up sweep files, and how the reader takes them."""

from reportgen.errors import InputRejected
from reportgen.intake.touchstone import parse_touchstone
from reportgen.model import Finding, Severity

REJECT, WARN, NOTE = Severity.ERROR, Severity.WARNING, Severity.NOTE
OPTION = "# MHz S RI R 50\n"
TWO_PORT_ROW = "{} 0.1 0.2 0.81 -0.3 0.8 -0.31 0.15 0.25\n"
ONE_PATH_ROW = "{} 0.1 0.2 0.81 -0.3 0 0 0 0\n"


def one_port(*frequencies: object, value: str = "0.10 0.20") -> str:
    return "".join(f"{frequency} {value}\n" for frequency in frequencies)


def two_port(*frequencies: object, row: str = TWO_PORT_ROW) -> str:
    return "".join(row.format(frequency) for frequency in frequencies)


def verdict(
    content: str | bytes, file: str = "a.s1p", **settings
) -> tuple[bool, tuple[Finding, ...]]:
    """Whether a file was read, and its findings."""
    data = content.encode() if isinstance(content, str) else content
    try:
        return True, parse_touchstone(data, file=file, **settings)[1]
    except InputRejected as rejected:
        return False, rejected.findings
