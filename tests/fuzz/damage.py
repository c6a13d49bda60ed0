"""Damaged copies of table files: what disks, mail programs, spreadsheets and tired people do to them."""

from __future__ import annotations

import io
import random
import zipfile
from collections.abc import Callable

ENCODINGS = (
    "utf-8-sig",
    "utf-16",
    "utf-16-le",
    "utf-16-be",
    "cp1252",
    "latin-1",
    "utf-32",
    "cp437",
    "mac-roman",
)
ODD_CELLS = (
    "", "-1", "0", "1e400", "nan", "=1+1", "@x", "<script>alert(1)</script>", "2024-05-01", "12-Mar", "\x00", "\ufeff", 
    "?" * 40,
    "f→", "→", "9" * 30, "0,", ",", "1'", "6 x (", "6 x (8 vfs / )", "999999 x (1 m / 2 m)", "Ta-", "NE", "-", "--",
    "0-0", "5-1", "1-2-3", "±3", "½", "१२", "１２", "1.2.3", "∞", "1/0", "0/0 cm", "m", "cm", "ft", "'", '"', 
    "{}", "[]",
    '{"grain":[1]}', '{"grain":["0",[[2,[1,2,"",true,""]]]]}', "[" * 3000, "a\nb", "𝔘", "\u202e", "x" * 5000,
)  # fmt: skip


def flip_bytes(body: bytes, rng: random.Random) -> bytes:
    """A few bytes changed."""
    data = bytearray(body)
    for _ in range(rng.randint(1, 30)):
        data[rng.randrange(len(data))] = rng.randrange(256)
    return bytes(data)


def cut_off(body: bytes, rng: random.Random) -> bytes:
    """The end missing, or the beginning."""
    at = rng.randrange(len(body))
    return body[:at] if rng.random() < 0.7 else body[at:]


def block_lost(body: bytes, rng: random.Random) -> bytes:
    """A block in the middle missing or full of nulls."""
    start = rng.randrange(len(body))
    size = rng.randint(1, 400)
    return body[:start] + (b"\0" * size if rng.random() < 0.5 else b"") + body[start + size :]


def _lines(body: bytes) -> list[str]:
    return body.decode("utf-8", errors="replace").split("\n")


def swap_cells(body: bytes, rng: random.Random) -> bytes:
    """Cells of a line exchanged or replaced by odd ones."""
    lines = _lines(body)
    mark = max(",;\t|", key=lambda m: lines[len(lines) // 2].count(m))
    for _ in range(rng.randint(1, 12)):
        i = rng.randrange(len(lines))
        cells = lines[i].split(mark)
        j = rng.randrange(len(cells))
        if rng.random() < 0.6:
            cells[j] = rng.choice(ODD_CELLS)
        else:
            k = rng.randrange(len(cells))
            cells[j], cells[k] = cells[k], cells[j]
        lines[i] = mark.join(cells)
    return "\n".join(lines).encode("utf-8", errors="surrogatepass")


def drop_column(body: bytes, rng: random.Random) -> bytes:
    """A column gone, or emptied, or all headings shifted by one."""
    lines = _lines(body)
    mark = max(",;\t|", key=lambda m: lines[len(lines) // 2].count(m))
    j = rng.randrange(max(1, lines[len(lines) // 2].count(mark)))
    out = []
    for line in lines:
        cells = line.split(mark)
        if not line.startswith("#") and j < len(cells):
            cells = cells[:j] + cells[j + 1 :]
        out.append(mark.join(cells))
    return "\n".join(out).encode("utf-8")


def shuffle_rows(body: bytes, rng: random.Random) -> bytes:
    """Lines doubled, lost or in another order."""
    lines = _lines(body)
    for _ in range(rng.randint(1, 8)):
        i, j = rng.randrange(len(lines)), rng.randrange(len(lines))
        choice = rng.random()
        if choice < 0.4:
            lines.insert(i, lines[j])
        elif choice < 0.7 and len(lines) > 1:
            del lines[j]
        else:
            lines[i], lines[j] = lines[j], lines[i]
        if not lines:
            lines = [""]
    if rng.random() < 0.1:
        rng.shuffle(lines)
    return "\n".join(lines).encode("utf-8")


def other_encoding(body: bytes, rng: random.Random) -> bytes:
    """The same text in another encoding, line ends changed at times."""
    text = body.decode("utf-8", errors="replace")
    if rng.random() < 0.3:
        text = text.replace("\n", rng.choice(("\r\n", "\r", "\n\n")))
    return text.encode(rng.choice(ENCODINGS), errors="replace")


def other_marks(body: bytes, rng: random.Random) -> bytes:
    """Separators, decimal marks or quotation marks exchanged."""
    text = body.decode("utf-8", errors="replace")
    pairs = (
        (",", ";"),
        (";", ","),
        (".", ","),
        ('"', ""),
        (",", "\t"),
        ('"', "'"),
        ("\n", '"\n'),
        ("-", "–"),
    )
    old, new = rng.choice(pairs)
    return text.replace(old, new, -1 if rng.random() < 0.5 else rng.randint(1, 20)).encode("utf-8")


def broken_workbook(body: bytes, rng: random.Random) -> bytes:
    """A member of the archive damaged inside, so that the archive itself still opens."""
    source = zipfile.ZipFile(io.BytesIO(body))
    buffer = io.BytesIO()
    names = [n for n in source.namelist() if n.endswith(".xml")]
    hit = rng.choice(names)
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as target:
        for name in source.namelist():
            data = source.read(name)
            if name == hit:
                if rng.random() < 0.2:
                    continue
                text = data.decode("utf-8", errors="replace")
                for _ in range(rng.randint(1, 10)):
                    i = rng.randrange(len(text))
                    text = (
                        text[:i]
                        + rng.choice(("", "9", "<", "e99", "-", "&", "A", "x" * 50))
                        + text[i + rng.randint(0, 3) :]
                    )
                data = text.encode("utf-8")
            target.writestr(name, data)
    return buffer.getvalue()


TEXT: tuple[Callable[[bytes, random.Random], bytes], ...] = (
    flip_bytes, cut_off, block_lost, swap_cells, swap_cells, drop_column, shuffle_rows, other_encoding, other_marks,
)  # fmt: skip
BOOK: tuple[Callable[[bytes, random.Random], bytes], ...] = (
    flip_bytes,
    cut_off,
    block_lost,
    broken_workbook,
    broken_workbook,
)


def damaged(body: bytes, rng: random.Random) -> bytes:
    """A damaged copy of a file: one kind of damage, now and then two."""
    book = body.startswith(b"PK")
    for number in range(1 if rng.random() < 0.75 else 2):
        if not body:
            break
        # what is left of an archive need not open, so the second hit on it is a blind one
        kinds = (flip_bytes, cut_off) if book and number else BOOK if book else TEXT
        body = rng.choice(kinds)(body, rng)
    return body
