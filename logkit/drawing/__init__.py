"""The annotated column: styles, textures and motifs, tracks, sheets, and SVG, PDF and PNG of them.

Results come in as data; nothing here calculates grading, trends or flow.
"""

from logkit.drawing.column import draw_column
from logkit.drawing.drawing import Drawing
from logkit.drawing.render import svg_to_png

__all__ = ["Drawing", "draw_column", "svg_to_png"]
