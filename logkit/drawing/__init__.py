"""The annotated column: styles, textures and motifs, tracks, sheets, and SVG, PDF and PNG of them.

Results come in as data; nothing here calculates grading, trends or flow.
"""

from logkit.drawing.column import draw_column
from logkit.drawing.drawing import Drawing

__all__ = ["Drawing", "draw_column"]
