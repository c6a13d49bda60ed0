"""A core-run note: `KG-C2 core 3, 2104'6"–2112'3", cut 30' rec 27.4'`. Where lost core lies is decided by rows."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from logkit.tables.cells.lengths import Span, is_span, read_length, read_span
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note
from logkit.tables.cells.refused import refusal

_LENGTH = r"\d+(?:[.,]\d+)?(?:\s*(?:'(?:\s*\d+(?:[.,]\d+)?\s*(?:\"|''))?|ft|feet|m|cm|metres?)(?![A-Za-z]))?"
_CUT = re.compile(rf"\b(?:cut|cored|drilled|run)\s*[:=]?\s*(?P<length>{_LENGTH})", re.I)
_RECOVERED = re.compile(
    rf"\b(?:rec(?:overed|overy|'d)?)\.?\s*[:=]?\s*(?P<length>{_LENGTH})\s*(?P<percent>%)?", re.I
)
_SPAN = re.compile(rf"(?<![\w.])(?P<span>{_LENGTH}\s*(?:-|to)\s*{_LENGTH})(?![\w])", re.I)

_LEAST_LOSS_M = 0.005


@dataclass(frozen=True, slots=True)
class CoreNote:
    """What a core note says.

    Attributes
    ----------
    name : well and core as written, "" when not named
    span : depths in the order written
    cut_m, recovered_m : length cut and recovered, m
    rest : words that are about the bed and not about the run
    """

    name: str = ""
    span: Span | None = None
    cut_m: float | None = None
    recovered_m: float | None = None
    rest: str = ""

    @property
    def lost_m(self) -> float | None:
        """Length cut and not recovered, m; None when one of the two is not known."""
        if self.cut_m is None or self.recovered_m is None:
            return None
        return self.cut_m - self.recovered_m


@lru_cache(maxsize=CACHE_SIZE)
def read_core_note(text: str, unit: str | None = None) -> Reading[CoreNote]:
    """A core-run note, or None without remarks when the text is not one.

    Parameters
    ----------
    text : the cell
    unit : unit of the sheet for lengths without one
    """
    plain = clean(text)
    cut, recovered = _CUT.search(plain), _RECOVERED.search(plain)
    named = re.search(r"\bcore\s*#?\s*\d+", plain, re.I)
    if not plain or not (cut or recovered or named):
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    rest = plain
    cut_m = _metres(cut, unit, remarks)
    recovered_m = _metres(recovered, unit, remarks)
    for match in sorted((m for m in (cut, recovered) if m), key=lambda m: -m.start()):
        rest = f"{rest[: match.start()]},{rest[match.end() :]}"
    if recovered and recovered["percent"]:
        share = float(recovered["length"].replace(",", ".")) / 100
        recovered_m = share * cut_m if cut_m is not None else None
    found = _SPAN.search(rest)
    span = None
    if found and is_span(found["span"]):
        reading = read_span(found["span"], unit)
        span = reading.value
        remarks.extend(reading.remarks)
        rest = f"{rest[: found.start()]},{rest[found.end() :]}"
    parts = [p.strip() for p in rest.split(",") if p.strip()]
    name = next((p for p in parts if re.search(r"\bcore\b", p, re.I)), "")
    _say_recovery(cut_m, recovered_m, remarks)
    if span:
        remarks.append(note("core.depth_reference", "depths of a core are taken as driller's depths",
                            "name the depth reference in the header when it is the logger's"))  # fmt: skip
    words = ", ".join(p for p in parts if p != name)
    return Reading(CoreNote(name, span, cut_m, recovered_m, words), tuple(remarks))


def _metres(match: re.Match[str] | None, unit: str | None, remarks: list[Remark]) -> float | None:
    if match is None or (match.groupdict().get("percent")):
        return None
    reading = read_length(match["length"], unit)
    remarks.extend(reading.remarks)
    return reading.value.metres if reading.value else None


def _say_recovery(cut_m: float | None, recovered_m: float | None, remarks: list[Remark]) -> None:
    if not cut_m or recovered_m is None:
        return
    share = recovered_m / cut_m
    if abs(cut_m - recovered_m) < _LEAST_LOSS_M:
        remarks.append(note("core.recovery", "recovery complete, nothing lost"))
        return
    if share > 1.0:
        remarks.append(
            note("core.over_recovery", f"recovered {share:.1%} of the length cut: the core expanded, or part of it is "
                 "from the run above", "shift the run when its top belongs to the run above")
        )  # fmt: skip
        return
    remarks.append(
        note("core.recovery", f"recovery {share:.1%}, {cut_m - recovered_m:.3g} m lost; placed at the base of the run "
             "unless the log says where", "write the lost interval as its own row when it is known")
    )  # fmt: skip
    if share < 0.01:
        remarks.append(
            error(
                "core.no_recovery",
                f"a recovery of {share:.1%} leaves nothing to log",
                "check the two lengths",
            )
        )
