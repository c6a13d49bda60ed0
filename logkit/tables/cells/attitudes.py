"""Attitudes and bearings as text: `22/140`, `N30E 40SE`, `30→220`, `030-210`, `NNE`, `075`. One text, many notations.

Which feature was measured, and what the reading means for a flow, is decided in `currents`.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache
from typing import Literal

from logkit.tables.cells.lengths import number
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, question, quoted
from logkit.tables.cells.refused import refusal

COMPASS = {name: index * 22.5 for index, name in enumerate((
    "N", "NNE", "NE", "ENE", "E", "ESE", "SE", "SSE", "S", "SSW", "SW", "WSW", "W", "WNW", "NW", "NNW"))}  # fmt: skip
"""Compass point -> degrees."""

_POINT = "|".join(sorted(COMPASS, key=lambda p: -len(p)))
_D = r"\d{1,3}(?:\.\d+)?"
_DEG = r"(?:°|deg\b)?"
TOKEN = re.compile(
    rf"""(?<![\w.])(?:
      (?P<q1>[NS])\s?(?P<qa>\d{{1,2}}(?:\.\d+)?)\s?{_DEG}\s?(?P<q2>[EW])(?:\s*[,/;\s]\s*(?P<qdip>\d{{1,2}}(?:\.\d+)?)\s?{_DEG}\s?(?P<qdir>{_POINT}))?
     |(?P<strike>{_D})\s?{_DEG}\s*[/,\s]\s*(?P<sdip>\d{{1,2}}(?:\.\d+)?)\s?{_DEG}\s?(?P<sdir>{_POINT})
     |(?P<plunge>\d{{1,2}}(?:\.\d+)?)\s?{_DEG}\s*(?:→|->|=>|>|@|(?:to(?:wards?)?|dir)\s(?=\d{{3}}))\s*(?P<trend>{_D})\s?{_DEG}
     |(?P<first>{_D})\s?{_DEG}\s*/\s*(?P<second>{_D})\s?{_DEG}
     |(?P<from>{_D})\s?{_DEG}\s*-\s*(?P<until>{_D})\s?{_DEG}
     |(?P<p1>{_POINT})\s*[-/]\s*(?P<p2>{_POINT})
     |(?P<point>{_POINT})
     |(?P<bearing>{_D})\s?{_DEG}
    )(?![\w])""",
    re.X,
)  # fmt: skip

Nature = Literal["pair", "line", "azimuth", "axis"]


@dataclass(frozen=True, slots=True)
class Attitude:
    """One reading found in a text.

    Attributes
    ----------
    nature : "pair" (dip with direction), "line" (plunge and trend), "azimuth" or "axis" (bearings only)
    azimuth_deg : dip direction, trend or bearing, 0 to below 360
    dip_deg : dip or plunge, None for a bearing
    start, end : place in the text
    sure : False when it could be read in another way
    """

    nature: Nature
    azimuth_deg: float
    dip_deg: float | None
    start: int
    end: int
    sure: bool = True


def find_attitudes(text: str, remarks: list[Remark], pairs_only: bool = False) -> list[Attitude]:
    """All readings in a text; with `pairs_only` no bare bearings, which could be any number."""
    found: list[Attitude] = []
    azimuth_second = _order(text)
    for match in TOKEN.finditer(text):
        if pairs_only and (match["bearing"] or match["point"] or match["p1"] or match["from"]):
            continue
        found.extend(_read(match, azimuth_second, remarks))
    return found


def _order(text: str) -> bool | None:
    """True when the clear pairs of a text have the azimuth second, False when first, None when none is clear."""
    for match in TOKEN.finditer(text):
        if match["first"]:
            clear = _azimuth_is_second(match["first"], match["second"])
            if clear is not None:
                return clear
    return None


def _azimuth_is_second(first: str, second: str) -> bool | None:
    a, b = number(first)[0] or 0.0, number(second)[0] or 0.0
    if (a > 90) != (b > 90):
        return b > 90
    if a <= 90 and b <= 90:
        digits = [len(t.split(".")[0].split(",")[0]) for t in (first, second)]
        if (digits[0] == 3) != (digits[1] == 3):
            return digits[1] == 3
    return None


def _read(match: re.Match[str], azimuth_second: bool | None, remarks: list[Remark]) -> list[Attitude]:
    start, end = match.span()
    if match["q1"] or match["strike"]:
        return _strike(match, remarks)
    if match["plunge"]:
        return _checked("line", match["trend"], match["plunge"], match, remarks)
    if match["first"]:
        return _pair(match, azimuth_second, remarks)
    if match["from"]:
        return _between(match, remarks)
    if match["p1"]:
        one, two = COMPASS[match["p1"]], COMPASS[match["p2"]]
        if abs(one - two) == 180:
            return [Attitude("axis", min(one, two), None, start, end)]
        remarks.append(_two_or_range(match[0], f"{one:g}", f"{two:g}"))
        return [Attitude("azimuth", azimuth, None, start, end, False) for azimuth in (one, two)]
    if match["point"]:
        return [Attitude("azimuth", COMPASS[match["point"]], None, start, end)]
    return _checked("azimuth", match["bearing"], None, match, remarks)


def _checked(
    nature: Nature,
    azimuth: str,
    dip: str | None,
    match: re.Match[str],
    remarks: list[Remark],
    sure: bool = True,
) -> list[Attitude]:
    bearing, angle = number(azimuth)[0], number(dip)[0] if dip else None
    if bearing is None or not 0 <= bearing <= 360:
        remarks.append(
            error("currents.azimuth", f"{quoted(match[0])}: an azimuth lies between 0 and 360 degrees",
                  "correct the azimuth")
        )  # fmt: skip
        return []
    if dip is not None and (angle is None or not 0 <= angle <= 90):
        remarks.append(
            error(
                "currents.dip", f"{quoted(match[0])}: a dip lies between 0 and 90 degrees", "correct the dip"
            )
        )
        return []
    return [Attitude(nature, bearing % 360, angle, match.start(), match.end(), sure)]


def _pair(match: re.Match[str], azimuth_second: bool | None, remarks: list[Remark]) -> list[Attitude]:
    first, second = match["first"], match["second"]
    a, b = number(first)[0] or 0.0, number(second)[0] or 0.0
    if abs(a - b) == 180 and max(a, b) <= 360 and len(first) == len(second) == 3:
        # three digits on both sides: the two ends of a line; `30/210` is a dip with its direction
        return [Attitude("axis", min(a, b) % 360, None, match.start(), match.end())]
    if a > 90 and b > 90:
        remarks.append(
            error("currents.two_azimuths", f"{quoted(match[0])} holds two azimuths and no dip",
                  "write dip/dip direction as 22/140, or separate two azimuths with &")
        )  # fmt: skip
        return []
    clear = _azimuth_is_second(first, second)
    second_is_azimuth = clear if clear is not None else (True if azimuth_second is None else azimuth_second)
    azimuth, dip = (second, first) if second_is_azimuth else (first, second)
    if clear is None and a != b:
        remarks.append(
            question("currents.which_is_dip", f"{quoted(match[0])}: either number may be the dip",
                     "write the azimuth with three digits, for example 22/045",
                     (f"dip {dip} towards {azimuth}", f"dip {azimuth} towards {dip}"))
        )  # fmt: skip
    return _checked("pair", azimuth, dip, match, remarks, clear is not None or a == b)


def _between(match: re.Match[str], remarks: list[Remark]) -> list[Attitude]:
    one, two = number(match["from"])[0] or 0.0, number(match["until"])[0] or 0.0
    if abs(one - two) == 180 and max(one, two) <= 360:
        return [Attitude("axis", min(one, two) % 360, None, match.start(), match.end())]
    remarks.append(_two_or_range(match[0], match["from"], match["until"]))
    return [
        attitude for text in (match["from"], match["until"])
        for attitude in _checked("azimuth", text, None, match, remarks, False)
    ]  # fmt: skip


def _two_or_range(written: str, one: str, two: str) -> Remark:
    return question("currents.two_or_range", f"{quoted(written)} may be two readings or a range",
                    "separate readings with &", (f"readings {one} and {two}", f"range {one} to {two}"))  # fmt: skip


def _strike(match: re.Match[str], remarks: list[Remark]) -> list[Attitude]:
    """Strike with dip and the quadrant of the dip; a quadrant bearing alone is an azimuth."""
    if match["q1"]:
        angle = number(match["qa"])[0] or 0.0
        if angle > 90:
            remarks.append(error("currents.azimuth", f"{quoted(match[0])}: a quadrant bearing ends at 90 degrees",
                                 "correct the bearing"))  # fmt: skip
            return []
        strike = {"NE": angle, "NW": -angle, "SE": 180 - angle, "SW": 180 + angle}[
            match["q1"] + match["q2"]
        ] % 360
        if not match["qdip"]:
            return [Attitude("azimuth", strike, None, match.start(), match.end())]
        dip, side = match["qdip"], match["qdir"]
    else:
        strike, dip, side = number(match["strike"])[0] or 0.0, match["sdip"], match["sdir"]
    off = [abs((strike + turn - COMPASS[side] + 180) % 360 - 180) for turn in (90, 270)]
    if min(off) > 67.5 or strike > 360:
        remarks.append(
            error("currents.dip_side", f"{quoted(match[0])}: a bed striking {strike:.0f} cannot dip to {side}",
                  "correct the strike or the side of the dip")
        )  # fmt: skip
        return []
    direction = (strike + (90 if off[0] <= off[1] else 270)) % 360
    return _checked("pair", f"{direction:.1f}", dip, match, remarks)


@lru_cache(maxsize=CACHE_SIZE)
def read_attitude(text: str) -> Reading[tuple[float, float]]:
    """Attitude of a plane such as bedding: (dip direction, dip) in degrees.

    Notes
    -----
    `140/22` and `22/140` read alike; `N30E 40SE` is a strike with a dip quadrant.
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    if plain.casefold() in ("horizontal", "flat", "flat-lying", "0", "none"):
        return Reading((0.0, 0.0))
    remarks: list[Remark] = []
    spaced = re.sub(r"^(\d{1,3})\s*[,\s]\s*(\d{1,3})$", r"\1/\2", plain)
    found = [a for a in find_attitudes(spaced, remarks) if a.dip_deg is not None]
    if len(found) == 1:
        return Reading((found[0].azimuth_deg, float(found[0].dip_deg or 0.0)), tuple(remarks))
    if not any(r.level == "error" for r in remarks):
        remarks.append(
            error("attitude.unreadable", f"{quoted(plain)} is not one dip with its direction",
                  "write dip direction/dip as 140/22, or strike and dip as N30E 40SE")
        )  # fmt: skip
    return Reading(None, tuple(remarks))
