"""README.md and DEVELOPERS.md keep up with what they speak of."""

import re
from pathlib import Path

import pytest

from reconcile import analyse, read_campaign

ROOT = Path(__file__).parents[1]
ROOMS = [folder for folder in sorted((ROOT / "reconcile").iterdir()) if (folder / "__init__.py").is_file()]


def test_the_command_of_the_readme_is_the_one_that_ci_runs():
    readme, script = ((ROOT / name).read_text(encoding="utf-8") for name in ("README.md", ".ci/run"))
    blocks = re.findall(r"```sh\n(.*?)\n```", readme, re.DOTALL)
    assert len(blocks) == 2
    assert script.rstrip().endswith(f"# The second command of README.md:\n{blocks[1]}")


@pytest.mark.parametrize("room", ROOMS, ids=lambda room: room.name)
def test_the_map_has_every_module(room):
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    section = re.search(rf"^\*\*{room.name}\*\*: .*?(?=^\*\*|^## )", text, re.MULTILINE | re.DOTALL)
    assert section is not None
    named = re.findall(r"^\| `(\w+)` \|", section[0], re.MULTILINE)
    assert sorted(named) == sorted(path.stem for path in room.glob("*.py") if path.stem != "__init__")


@pytest.mark.parametrize("first", ["salt,molality", "salt,initial_molality"])
def test_the_tables_of_the_readme_can_be_read(first, tmp_path):
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    lines = re.search(rf"^    {first}.*\n(?:    KCl.*\n)+", readme, re.MULTILINE)
    assert lines is not None
    table = tmp_path / "spring.csv"
    table.write_text(re.sub(r"^    ", "", lines[0], flags=re.MULTILINE), encoding="utf-8")
    assert analyse(read_campaign(table)).salts["runs"].tolist() == [3]
