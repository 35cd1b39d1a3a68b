"""The examples that the help shows are commands that run, in the order in which they stand."""

import glob
import shlex

import pytest
from click.testing import CliRunner

from vibsym.cli.main import COMMANDS, cli


def examples(help_text):
    """Return the lines that begin with `vibsym` as lists of words, continued ones joined."""
    lines = help_text.replace("\\\n", " ").splitlines()
    return [shlex.split(line)[1:] for line in map(str.strip, lines) if line.startswith("vibsym ")]


def expanded(words):
    """Return the words with file patterns filled in, as a shell does."""
    return [name for word in words for name in (sorted(glob.glob(word)) if "*" in word else []) or [word]]


@pytest.mark.parametrize("name", ["", *COMMANDS])
def test_examples_in_the_help_run(name, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    text = (cli.get_command(None, name) if name else cli).help
    wanted = examples(text)
    assert wanted, "no example"
    if wanted[0][0] != "samples":
        assert CliRunner().invoke(cli, ["samples", "try-it"]).exit_code == 0
    for words in wanted:
        result = CliRunner().invoke(cli, expanded(words))
        assert result.exit_code == 0, (words, result.output)
        assert result.output or "--output" in words, words


@pytest.mark.parametrize("name", COMMANDS)
def test_every_option_says_what_it_is_for(name):
    for parameter in cli.get_command(None, name).params:
        assert parameter.param_type_name == "argument" or parameter.help, parameter.name
