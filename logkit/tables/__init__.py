"""Tables of beds: reading them from files and frames, checking them, writing them back."""

from logkit.model import LOG_TOOLS
from logkit.tables.blank import new_table
from logkit.tables.frame import log_to_frame
from logkit.tables.read import log_from_frame, read_log, read_logs
from logkit.tables.write import write_log, write_logs

LOG_TOOLS.register("frame", log_to_frame, replace=True)
LOG_TOOLS.register("writer", write_log, replace=True)

__all__ = ["log_from_frame", "log_to_frame", "new_table", "read_log", "read_logs", "write_log", "write_logs"]
