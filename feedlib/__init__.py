"""Feed harnesses computed: read a plan, check it, solve it. Only what stands here is public; see `conventions`."""

from feedlib.answer import Answer, Figures, Verdict
from feedlib.check import Problem, check
from feedlib.errors import FeedError, PlanError, SolveError
from feedlib.plan import Plan
from feedlib.plan_file import read_plan, write_plan
from feedlib.solve import solve

__all__ = [
    "Answer",
    "FeedError",
    "Figures",
    "Plan",
    "PlanError",
    "Problem",
    "SolveError",
    "Verdict",
    "check",
    "read_plan",
    "solve",
    "write_plan",
]
