"""The charge against the room, the machinery room and the change of safety class, one file for each family of methods.

Pure functions of a refrigerant and a room; `room_check` puts them together for one refrigerant of a result. Nothing
here certifies anything.
"""

from retrofit.checks.room.check import room_check
from retrofit.checks.room.findings import room_findings

__all__ = ["room_check", "room_findings"]
