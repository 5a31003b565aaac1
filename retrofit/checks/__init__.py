"""What a result means: gates with thresholds and sources, verdicts, and the answer in plain words.

No check changes a number. A missing datum is a finding of level `unknown`, never a good one.
"""

from retrofit.checks.advice import Advice, advice, deed
from retrofit.checks.answer import Answer, Matter, answer
from retrofit.checks.assess import LEVELS, assess, require_usable, verdict
from retrofit.checks.limits import not_checked
from retrofit.checks.thresholds import Threshold, threshold, thresholds_for

__all__ = [
    "LEVELS",
    "Advice",
    "Answer",
    "Matter",
    "Threshold",
    "advice",
    "answer",
    "assess",
    "deed",
    "not_checked",
    "require_usable",
    "threshold",
    "thresholds_for",
    "verdict",
]
