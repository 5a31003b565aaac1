"""What travels inside a report, and computing it again: case, versions, digests, and the result with its fingerprint.

A fingerprint is no signature: who alters numbers and fingerprint alike leaves no trace in the file. Computing again
shows it all the same.
"""

from retrofit.report.carried.block import with_block
from retrofit.report.carried.reader import Carried, read_carried
from retrofit.report.carried.rerun import Rerun, rerun
from retrofit.report.carried.shown import rerun_json, rerun_text

__all__ = ["Carried", "Rerun", "read_carried", "rerun", "rerun_json", "rerun_text", "with_block"]
