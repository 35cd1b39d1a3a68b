"""A progress bar on standard error: only on a terminal, only when the work is long, gone when it is done.

rich draws it and is loaded only then.
"""

import sys
from collections.abc import Callable, Iterable, Iterator
from contextlib import contextmanager


@contextmanager
def progress(label: str, least: int) -> Iterator[Callable[[int, int], None] | None]:
    """Give a callback (done, all) for a long loop of the library, or None where nobody looks; below `least` no bar."""
    if not sys.stderr.isatty():
        yield None
        return
    drawn = []

    def told(done: int, total: int) -> None:
        if total < least:
            return
        if not drawn:
            drawn.append(_bar())
            drawn[0].start()
            drawn[0].add_task(label, total=total)
        drawn[0].update(drawn[0].task_ids[0], completed=done)

    try:
        yield told
    finally:
        for bar in drawn:
            bar.stop()


def counted(items: Iterable, label: str, least: int) -> Iterator:
    """Go through a collection and draw how far it is."""
    items = list(items)
    with progress(label, least) as told:
        for done, item in enumerate(items):
            if told:
                told(done, len(items))
            yield item


def _bar():
    from rich.console import Console
    from rich.progress import Progress

    return Progress(console=Console(stderr=True), transient=True)
