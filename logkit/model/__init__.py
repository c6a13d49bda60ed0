"""The records everything passes around: frozen dataclasses without behaviour beyond simple look-ups."""

from logkit.model.bed import (
    Bed,
    Bioturbation,
    Colour,
    Contact,
    CurrentReading,
    GrainState,
    LargestClasts,
    SetThickness,
    SizeInterval,
    SizeReading,
    Structure,
)
from logkit.model.caution import CAUTION, CAUTION_SHORT
from logkit.model.finding import LEVELS, Finding, Level
from logkit.model.flow import WIND_TRANSPORT, Bound, Clash, Phase, PhaseEstimate, Quantiles, Tendency
from logkit.model.log import LOG_TOOLS, SETTINGS, Header, Log
from logkit.model.trend import CurrentSummary, Grading, GradingWord, Package

__all__ = [
    "CAUTION",
    "CAUTION_SHORT",
    "LEVELS",
    "LOG_TOOLS",
    "SETTINGS",
    "WIND_TRANSPORT",
    "Bed",
    "Bioturbation",
    "Bound",
    "Clash",
    "Colour",
    "Contact",
    "CurrentReading",
    "CurrentSummary",
    "Finding",
    "Grading",
    "GradingWord",
    "GrainState",
    "Header",
    "LargestClasts",
    "Level",
    "Log",
    "Package",
    "Phase",
    "PhaseEstimate",
    "Quantiles",
    "SetThickness",
    "SizeInterval",
    "SizeReading",
    "Structure",
    "Tendency",
]  # fmt: skip
