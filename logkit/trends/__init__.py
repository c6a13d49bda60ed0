"""Statistics of beds and logs: grading, packages, thickness, transitions, palaeocurrents.

This page only names what is public; the work is in the modules. May use vocabulary, grains and model,
never hydraulics or tables. Plots are in `logkit.trends.plots`, which needs matplotlib only when called.
"""

from logkit.trends.find import find_trends
from logkit.trends.grading import grade_bed
from logkit.trends.order import OrderTest
from logkit.trends.packages import Boundary
from logkit.trends.results import Trends
from logkit.trends.thickness import Thickness
from logkit.trends.transitions import Transitions

__all__ = ["Boundary", "OrderTest", "Thickness", "Transitions", "Trends", "find_trends", "grade_bed"]
