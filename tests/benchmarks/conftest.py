"""Benchmarks run when they are named (`python -m pytest tests/benchmarks -s`), not with the tests."""


def pytest_ignore_collect(config):
    """Leave this folder out unless it is named on the command line."""
    return None if any("benchmarks" in argument for argument in config.args) else True
