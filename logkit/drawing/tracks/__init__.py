"""The tracks of a column: what each shows, when it is shown, and how it is drawn. A style orders them by name."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Shape
from logkit.drawing.tracks import (
    current,
    curves,
    depth,
    glyphs,
    labels,
    notes,
    position,
    ribbon,
    sails,
    strips,
    texture,
)
from logkit.model import Log, PhaseEstimate
from logkit.registry import Registry


@dataclass(frozen=True, slots=True)
class Material:
    """What a log offers to the tracks, before anything is placed."""

    log: Log
    estimates: tuple[PhaseEstimate, ...]
    packages: int
    azimuths: int
    curves: int


@dataclass(frozen=True, slots=True)
class Track:
    """One kind of track.

    Attributes
    ----------
    shown : whether a log has anything for it
    draw : its shapes on one sheet
    """

    shown: Callable[[Material], bool]
    draw: Callable[[Scene, View, Tally], list[Shape]]


TRACKS: Registry[Track] = Registry("track")

for _name, _track in {
    "trend": Track(lambda m: m.packages > 0, sails.draw),
    "scale": Track(lambda m: True, position.draw_scale),
    "names": Track(lambda m: bool(m.log.real_beds), position.draw_names),
    "gamma": Track(lambda m: m.curves > 0, curves.draw),
    "colour": Track(lambda m: any(bed.colour for bed in m.log.beds), strips.draw_colour),
    "texture": Track(lambda m: True, lambda s, v, t: [*texture.draw(s, v, t), *labels.draw(s, v, t)]),
    "glyphs": Track(lambda m: any(bed.structures for bed in m.log.beds), glyphs.draw_glyphs),
    "fossils": Track(lambda m: any(bed.fossils for bed in m.log.beds), glyphs.draw_fossils),
    "bioturbation": Track(lambda m: any(bed.bioturbation for bed in m.log.beds), strips.draw_bioturbation),
    "current": Track(lambda m: m.azimuths > 0, current.draw),
    "velocity": Track(lambda m: bool(m.estimates), ribbon.draw),
    "depth": Track(
        lambda m: any(e.flow_depth or e.limit_flow_depth_m is not None for e in m.estimates), depth.draw
    ),
    "notes": Track(lambda m: notes.any_notes(m.log, m.estimates), notes.draw),
}.items():
    TRACKS.register(_name, _track)
