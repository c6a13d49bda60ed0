"""The flow engine: phases of beds, criteria, ranges of velocity and depth, the ledger, the history.

Examples
--------
>>> from logkit.flow import infer_flow
>>> from logkit.model import Bed, GrainState, Header, Log, SizeInterval, Structure
>>> bed = Bed("1", 0.0, 0.8, grain=(GrainState(0.0, SizeInterval(0.25, 0.354, "mL")),),
...           structures=(Structure("trough_cross_bedding"),))
>>> history = infer_flow(Log(Header(setting="river"), (bed,)))
>>> history.estimates[0].bound
'range'
"""

from logkit.flow.criteria import CRITERIA, Cells, Context, Criterion, DepthReading
from logkit.flow.history import FlowHistory
from logkit.flow.inference import infer_flow
from logkit.flow.phases import split_phases
from logkit.flow.states import Fluid, states_at
from logkit.flow.tendency import BedPattern, Transition

__all__ = [
    "CRITERIA", "BedPattern", "Cells", "Context", "Criterion", "DepthReading", "FlowHistory", "Fluid",
    "Transition", "infer_flow", "split_phases", "states_at",
]  # fmt: skip
