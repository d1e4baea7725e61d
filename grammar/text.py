"""Bytes of a file to text: the encodings that netlists are met in, and nothing that is not text."""

from __future__ import annotations

import codecs

from .errors import NetlistError
from .netlist import Place

_SAMPLE = 1024
_BYTE_ORDER_MARKS = (
    (codecs.BOM_UTF8, "utf-8"),
    (codecs.BOM_UTF16_LE, "utf-16-le"),
    (codecs.BOM_UTF16_BE, "utf-16-be"),
)


def decode(data: bytes, file: str) -> str:
    r"""Return the text of `data`, line ends as `\n`.

    Tried in turn: the encoding that a byte order mark names, UTF-16 without a mark (told by its zero bytes),
    UTF-8, and Windows-1252, in which old exporters write the micro sign.

    Raises NetlistError where the bytes are not text: a NUL character, or a mark that the bytes belie.
    """
    encoding, start = _encoding(data)
    try:
        text = data[start:].decode(encoding)
    except UnicodeDecodeError:
        if start:
            raise NetlistError(
                f"the file is marked as {encoding.upper()} but is not",
                Place(file, 0, 0),
                expected="text in the encoding of its byte order mark",
                remedy="export the netlist again as UTF-8",
            ) from None
        text = data.decode("cp1252", errors="replace")
    text = text.replace("\r\n", "\n").replace("\r", "\n")
    refuse_binary(text, file)
    return text


def refuse_binary(text: str, file: str) -> None:
    """Raise NetlistError where `text` holds a NUL character, which no text file does."""
    if "\0" in text:
        raise _binary(text, file)


def _encoding(data: bytes) -> tuple[str, int]:
    """Return the encoding to try and the length of the mark before the text."""
    for mark, encoding in _BYTE_ORDER_MARKS:
        if data.startswith(mark):
            return encoding, len(mark)
    sample = data[:_SAMPLE]
    # Latin text in UTF-16 has a zero in every second byte, and none in the others.
    if len(sample) >= 4 and len(data) % 2 == 0:
        even, odd = sample[0::2].count(0), sample[1::2].count(0)
        if even == 0 and odd * 10 > len(sample) * 4:
            return "utf-16-le", 0
        if odd == 0 and even * 10 > len(sample) * 4:
            return "utf-16-be", 0
    return "utf-8", 0


def _binary(text: str, file: str) -> NetlistError:
    index = text.index("\0")
    column = index - (text.rfind("\n", 0, index) + 1) + 1
    return NetlistError(
        "a NUL character: this is a binary file, not a netlist",
        Place(file, text.count("\n", 0, index) + 1, column),
        expected="plain text",
        remedy="export the schematic as an EDIF 2 0 0 netlist or a SPICE-style list and give that file",
    )
