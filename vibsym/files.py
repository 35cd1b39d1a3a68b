"""Read and write text files: any common encoding and line ending in, UTF-8 out, and never half a file.

Read: UTF-8 with or without a byte-order mark, else Latin-1; LF, CRLF or lone CR.  A file of bytes, of UTF-16 or of
unreasonable size is refused in one line before anything is made of it.
"""

import os
import stat
import sys

from vibsym.errors import VibsymError

LARGEST_FILE = 50_000_000       # bytes; a million atoms as XYZ
# Characters that would steer the terminal on which a comment or a message is shown; tab and line feed stay.
CONTROL = [*range(9), *range(0x0b, 0x20), *range(0x7f, 0xa0), *range(0x2028, 0x202f)]


def read_text(path) -> str:
    """Return the text of a file (`-` is standard input) with `\\n` as line ending and without control characters.

    Raises VibsymError, one line that names the file and the remedy, for anything that is not readable text.
    """
    name = display_name(path)
    data = _bytes_of(path, name)
    if len(data) > LARGEST_FILE:
        raise VibsymError(f"{name}: larger than {LARGEST_FILE // 1_000_000} MB; cut out the part that is needed")
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        raise VibsymError(f"{name}: the file is UTF-16; save it as UTF-8")
    if data[:3] == b"\xef\xbb\xbf":
        data = data[3:]
    if not data.strip():
        raise VibsymError(f"{name}: the file is empty")
    if b"\0" in data:
        kind = "UTF-16 without its mark" if _looks_like_utf16(data) else "a binary file, not text"
        raise VibsymError(f"{name}: the file is {kind}; save it as UTF-8 text")
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError:
        text = data.decode("latin-1")
    text = text.replace("\r\n", "\n").replace("\r", "\n")
    for character in map(chr, CONTROL):         # a search for each is far cheaper than a translation of every character
        if character in text:
            text = text.replace(character, " ")
    return text


def display_name(path) -> str:
    """Return how messages call a file: its path, or `standard input`."""
    return "standard input" if str(path) == "-" else os.fspath(path)


def write_text_atomically(path, text: str) -> None:
    """Write a UTF-8 file by writing beside it and renaming, so that an old file is replaced whole or not at all."""
    path = os.fspath(path)
    name = os.path.basename(path)
    if not name or os.path.isdir(path):
        raise VibsymError(f"{path or '(empty name)'}: is a directory; name a file to write")
    target = os.path.realpath(path)             # a link stays a link, its target is replaced
    if os.path.exists(target) and not os.path.isfile(target):
        _write_through(path, target, text)      # a device or a pipe (/dev/stdout) cannot be replaced
        return
    temporary = os.path.join(os.path.dirname(target), f".{name[:100]}.{os.getpid()}.part")
    try:
        mode = stat.S_IMODE(os.stat(target).st_mode) if os.path.exists(target) else None
        with open(temporary, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
        if mode is not None:
            os.chmod(temporary, mode)
        os.replace(temporary, target)
    except OSError as error:
        raise VibsymError(f"{path}: cannot be written ({_reason(error)})") from None
    finally:
        if os.path.lexists(temporary):
            os.unlink(temporary)


def _write_through(path: str, target: str, text: str) -> None:
    try:
        with open(target, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
    except OSError as error:
        raise VibsymError(f"{path}: cannot be written ({_reason(error)})") from None


def _bytes_of(path, name: str) -> bytes:
    if str(path) == "-":
        stream = getattr(sys.stdin, "buffer", None)
        if stream is None:                      # a stream of text, put there by a test or a notebook
            return sys.stdin.read(LARGEST_FILE + 1).encode()
        return stream.read(LARGEST_FILE + 1)
    try:
        state = os.stat(path)
        if stat.S_ISDIR(state.st_mode):
            raise VibsymError(f"{name}: is a directory; name a file in it")
        if state.st_size > LARGEST_FILE:
            size = state.st_size / 1e6
            raise VibsymError(f"{name}: {size:.0f} MB is more than the {LARGEST_FILE // 1_000_000} MB that are read; "
                              "cut out the part that is needed")
        with open(path, "rb") as file:
            return file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise VibsymError(f"{name}: no such file; check the name and the folder") from None
    except OSError as error:
        raise VibsymError(f"{name}: cannot be read ({_reason(error)})") from None
    except ValueError:                          # a zero byte in the name
        raise VibsymError(f"{name!r}: is not a file name") from None


def _reason(error: OSError) -> str:
    return (error.strerror or str(error)).lower()


def _looks_like_utf16(data: bytes) -> bool:
    sample = data[:1000]
    return max(sample[::2].count(0), sample[1::2].count(0)) > 0.4 * len(sample) / 2
