"""What each depth leaves out, in sentences written from the case's own settings."""

from __future__ import annotations

from rescue_planner.case.document import Case
from rescue_planner.case.plans import Plan
from rescue_planner.projection.results import Depth


def leaves_out(case: Case, depth: Depth) -> tuple[str, ...]:
    """Return what the numbers of `depth` leave out for this case, one sentence each.

    Parameters
    ----------
    case : Case
        The case that is projected.
    depth : depth
        `expected` or `exact`.

    Returns
    -------
    tuple of sentences
        Empty for a depth that is not computed.
    """
    if depth == "expected":
        return tuple(_expected(case))
    if depth == "exact":
        return tuple(_exact(case))
    return ()


def _expected(case: Case) -> list[str]:
    said = [
        _size(case),
        "Averages only: chance good and bad years, and loss by bad luck, are left out.",
    ]
    if _releases(case):
        said.append(
            "The share of released animals that lives to breed is taken as certain, not drawn."
        )
        said.append(
            "Moving a release within one generation changes nothing; the animals’ age plays no "
            "part."
        )
    if case.donors:
        said.append(_donors(case))
        said.append("No harm by mixing is counted; mating is at random, newcomers included.")
    if any(release.loan_years is not None for plan in case.plans for release in plan.releases):
        said.append("Animals on loan are counted as if they stayed.")
    if case.life_cycle is not None:
        said.append(
            "Numbers follow the average growth of females up to the carrying capacity; weather, "
            "die-offs and crowding below it are left out."
        )
    if case.trait is not None:
        said.append("Loss of the trait’s variance by selection itself is left out.")
    if case.inbreeding_cost is not None and case.inbreeding_cost.how == "by_load_loci":
        said.append(
            "Inbreeding cost by load loci needs simulated animals; here it follows F instead."
        )
    said.extend(_rules(case))
    return said


def _exact(case: Case) -> list[str]:
    if not case.loci:
        return []
    return [
        _size(case),
        "One locus at a time: gene flow and effective size are those of the average course.",
        "Donors’ frequencies of the allele stay as given.",
    ]


def _size(case: Case) -> str:
    given = case.recipient.effective_size.best
    if case.recipient.effective_size_follows_adults and case.life_cycle is not None:
        return f"Ne starts at {given:g} and follows the number of adults in proportion."
    own = [_own_size(plan) for plan in case.plans if plan.effective_size is not None]
    changes = any(
        action.carrying_capacity_times.best != 1
        for plan in case.plans
        for action in plan.other_actions
    )
    ends = "; ".join(own)
    held = f"Ne is held at {given:g}" + (f" ({ends})" if own else "")
    if changes:
        return held + ", times the carrying-capacity factor of other actions while they last."
    return held + ": it does not change with the number of animals."


def _own_size(plan: Plan) -> str:
    assert plan.effective_size is not None
    return f"{plan.effective_size.best:g} under {plan.name}"


def _donors(case: Case) -> str:
    drifting = [donor.name for donor in case.donors if donor.drifts]
    if not drifting:
        return "Donors stay as they are: what they give does not change them."
    names = " and ".join(drifting)
    return (
        f"{names} lose{'s' if len(drifting) == 1 else ''} diversity by drift; what donors give "
        "does not change their numbers."
    )


def _releases(case: Case) -> bool:
    return any(plan.releases or any(rule.release for rule in plan.rules) for plan in case.plans)


def _rules(case: Case) -> list[str]:
    rules = [rule for plan in case.plans for rule in plan.rules]
    if not rules:
        return []
    return [
        "Rules read the average course at each generation, without survey error; a stop acts at "
        "once."
    ]
