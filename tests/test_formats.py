"""`resources/formats.md` keeps its word: its file is read, and its tables list the keys that are printed."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest

from deliberate import cli
from deliberate.files import decode

CHECKOUT = Path(__file__).parent.parent
FORMATS = (CHECKOUT / "resources" / "formats.md").read_text(encoding="utf-8")
CLINICS = CHECKOUT / "scenarios" / "two-clinics.deliberate.json"
PARTS = dict(part.split("\n", 1) for part in FORMATS.split("\n### ")[1:])
REMEDY = re.compile(r"\{([^{}]*)\}")


def listed(command: str) -> list[str]:
    """The keys in the first column of the command's table."""
    rows = re.findall(r"^\| (`[^|]*) \|", PARTS[command], flags=re.MULTILINE)
    return [key for row in rows for key in re.findall(r"`(\w+)`", row)]


def printed(capfdbinary: pytest.CaptureFixture[bytes], *arguments: str) -> dict[str, object]:
    assert cli.main([arguments[0], str(CLINICS), *arguments[1:], "--json"]) == 0
    return json.loads(capfdbinary.readouterr().out)


@pytest.mark.parametrize(
    "arguments",
    [["rehearse"], ["doubt", "--draws", "20"], ["leverage"], ["remedies"], ["tables", "--tables", "2"]],
    ids=lambda arguments: arguments[0],
)
def test_the_keys_that_are_printed_are_listed(
    arguments: list[str], capfdbinary: pytest.CaptureFixture[bytes]
) -> None:
    data = printed(capfdbinary, *arguments)
    assert sorted(listed(arguments[0])) == sorted(data)
    assert f'"{data["format"]}", {data["version"]}' in PARTS[arguments[0]].replace("`", "")


def test_the_keys_of_a_remedy_are_listed(capfdbinary: pytest.CaptureFixture[bytes]) -> None:
    data = printed(capfdbinary, "remedies", "--aim", "less-spread")
    (aim,) = data["aims"]
    remedy = aim["remedies"][0]
    told = [re.findall(r'"(\w+)"', keys) for keys in REMEDY.findall(PARTS["remedies"])]
    assert [list(aim), list(remedy), list(remedy["before"]), list(remedy["effort"])] == told


def test_the_file_that_is_shown_can_be_read() -> None:
    (shown,) = re.findall(r"^```json\n(.*?)^```$", FORMATS, flags=re.MULTILINE | re.DOTALL)
    data = json.loads(shown)
    data["variants"][0]["people"].append({"id": "tomas"})  # whom the arrow names
    decode(json.dumps(data).encode())
