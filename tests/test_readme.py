"""What README.md shows is what the program prints; and every command and option stands there or in its help.

The console blocks are run in a fresh folder with a copy of the samples.  After a wanted change of the output,
`python tests/test_readme.py` sets the blocks anew; read the difference before it is committed.
"""

import os
import re
import shutil
import subprocess
import sys
import tempfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
README = ROOT / "README.md"
BLOCK = re.compile(r"```console\n(.*?)```", re.DOTALL)
PROGRAM = (sys.executable, "-m", "vibsym.cli.main")


def run(command, folder):
    """Run a line `vibsym ...` (no shell, no pipes) and return what it prints."""
    words = command.split()
    assert words[0] == "vibsym", command
    env = {**os.environ, "PYTHONIOENCODING": "utf-8", "PYTHONPATH": str(ROOT)}
    done = subprocess.run([*PROGRAM, *words[1:]], cwd=folder, env=env, capture_output=True, text=True, encoding="utf-8")
    return done.stdout + done.stderr


def renewed(block, folder):
    """Return a console block with the commands of the old one and their output of today."""
    commands = [line[2:] for line in block.splitlines() if line.startswith("$ ")]
    return "".join(f"$ {command}\n{run(command, folder)}" for command in commands)


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    place = tmp_path_factory.mktemp("readme")
    shutil.copytree(ROOT / "samples", place / "samples")
    return place


def test_console_blocks_show_what_the_program_prints(folder):
    blocks = BLOCK.findall(README.read_text(encoding="utf-8"))
    assert len(blocks) >= 6
    for block in blocks:                                    # in order: later blocks use what earlier ones wrote
        assert renewed(block, folder) == block


def test_python_block_runs():
    text = README.read_text(encoding="utf-8")
    (code,) = re.findall(r"```python\n(.*?)```", text, re.DOTALL)
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True,
                          env={**os.environ, "PYTHONIOENCODING": "utf-8"}, encoding="utf-8")
    assert done.returncode == 0 and done.stdout.startswith("D3h"), done.stderr


def test_every_command_and_its_options_stand_in_the_readme():
    from vibsym.cli.main import cli

    text = README.read_text(encoding="utf-8")
    for name in cli.list_commands(None):
        command = cli.get_command(None, name)
        assert f"vibsym {name}" in text, name
        assert f"vibsym {name} " in command.help, f"help of {name} has no example"
        for parameter in command.params:
            longest = max(parameter.opts, key=len)
            assert not longest.startswith("--") or longest == "--working" or longest in text, (name, longest)


def test_the_files_the_samples_readme_names_exist():
    text = (ROOT / "samples" / "README.md").read_text(encoding="utf-8")
    named = set(re.findall(r"^\| `([^`]+)`", text, re.MULTILINE))
    assert named == {path.name for path in (ROOT / "samples").iterdir()} - {"README.md"}


if __name__ == "__main__":
    with tempfile.TemporaryDirectory() as place:
        shutil.copytree(ROOT / "samples", Path(place) / "samples")
        old = README.read_text(encoding="utf-8")
        new = BLOCK.sub(lambda found: f"```console\n{renewed(found[1], place)}```", old)
        if "Traceback (most recent call last)" in new:
            sys.exit("a command ends in a traceback; README.md stays as it is")
        README.write_text(new, encoding="utf-8")
