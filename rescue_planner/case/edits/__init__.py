"""Edits: pure functions from a case to an `Edit`, the new case with a sentence for the user.

Every edit goes through the plain form and `read_case`, so that its result is valid; an edit that
would leave a problem raises `InvalidCase`.
"""

from rescue_planner.case.edits.asked import (
    add_target,
    add_what_if,
    answer_remark,
    remove_target,
    remove_what_if,
)
from rescue_planner.case.edits.base import Edit
from rescue_planner.case.edits.donors import (
    add_donor,
    add_locus,
    remove_donor,
    remove_locus,
    rename_donor,
    rename_locus,
)
from rescue_planner.case.edits.plans import (
    add_action,
    add_plan,
    add_release,
    add_rule,
    change_release,
    duplicate_plan,
    move_plan,
    remove_action,
    remove_plan,
    remove_release,
    remove_rule,
    remove_steady,
    rename_plan,
    set_steady,
)
from rescue_planner.case.edits.values import set_range, set_source, set_value

__all__ = [
    "Edit",
    "add_action",
    "add_donor",
    "add_locus",
    "add_plan",
    "add_release",
    "add_rule",
    "add_target",
    "add_what_if",
    "answer_remark",
    "change_release",
    "duplicate_plan",
    "move_plan",
    "remove_action",
    "remove_donor",
    "remove_locus",
    "remove_plan",
    "remove_release",
    "remove_rule",
    "remove_steady",
    "remove_target",
    "remove_what_if",
    "rename_donor",
    "rename_locus",
    "rename_plan",
    "set_range",
    "set_source",
    "set_steady",
    "set_value",
]
