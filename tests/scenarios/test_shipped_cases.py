"""What holds for every invented case that ships: sound, sourced, coherent, quick to compute."""

import json

import numpy as np
import pytest

from rescue_planner import cli, places
from rescue_planner.case.file import load
from rescue_planner.case.problems import read_case
from rescue_planner.case.remarks import answer_to
from rescue_planner.case.what_if import applied
from rescue_planner.projection.compare import compare
from rescue_planner.projection.remarks import every_remark
from rescue_planner.theory import life_table

PATHS = sorted(places.scenarios().glob("*.json"))
CHOSEN = (  # what people decide or agree on, so neither measured, borrowed nor guessed
    "time.start_year",
    "time.horizon_years",
    "plans.releases.who",
    "plans.releases.when",
    "plans.steady.from_year",
    "plans.steady.to_year",
    "plans.rules.surveys",
    "plans.rules.survey_every_years",
    "plans.rules.delay_years",
    "plans.rules.at_most",
    "plans.rules.release.who",
    "plans.other_actions.year",
    "plans.other_actions.until_year",
    "what_ifs",
    "targets.by_year",
    "run",
    "version",
)

LESSONS = {"gone", "donor-below-floor", "donor-not-made-up"}
NOTICES = {  # these say what a depth leaves out or fills in; nothing in the case is odd
    "disease-not-assessed",
    "left-out",
    "no-life-cycle",
    "simulated-only",
    "size-held",
    "young-sd-with-counts",
}


@pytest.fixture(params=PATHS, ids=lambda path: path.stem)
def path(request):
    return request.param


@pytest.fixture
def raw(path):
    return json.loads(path.read_text(encoding="utf-8"))


@pytest.fixture
def case(path):
    return load(path).case


def _numbers(node, at=""):
    """Yield (path without indices, number or object) for every number of a plain case."""
    if isinstance(node, dict) and "best" not in node:
        for name, inner in node.items():
            yield from _numbers(inner, f"{at}.{name}" if at else name)
    elif isinstance(node, list):
        for inner in node:
            yield from _numbers(inner, at)
    elif isinstance(node, dict) or (isinstance(node, int | float) and not isinstance(node, bool)):
        yield at, node


def _is_chosen(at):
    return any(at == one or at.startswith(f"{one}.") for one in CHOSEN)


def _life_numbers(life):
    survival = life.yearly_survival
    births = (
        life.share_of_females_breeding.best
        * life.young_per_breeding_female.expected
        * life.females_among_young.best
    )
    rates = (births, survival.first_year.best, survival.subadult.best, survival.adult.best)
    return (*rates, int(life.first_breeding_age.female.best), int(life.last_age.best))


def test_that_at_least_four_cases_ship():
    assert len(PATHS) >= 4


def test_that_a_case_has_no_problems(raw):
    assert read_case(raw).title == raw["title"]


def test_that_every_what_if_leaves_a_case_without_problems_and_changes_something(case):
    assert len(case.what_ifs) >= 2
    for what_if in case.what_ifs:
        assert applied(case, what_if.name) != case


def test_that_titles_populations_and_seeds_are_not_shared():
    cases = [load(path).case for path in PATHS]
    assert len({case.title for case in cases}) == len(cases)
    names = [case.recipient.name for case in cases]
    names += [donor.name for case in cases for donor in case.donors]
    assert len(set(names)) == len(names)
    assert len({case.species for case in cases}) == len(cases)


def test_that_species_and_authority_say_that_they_are_invented(case):
    assert "(invented)" in case.species
    assert "(invented)" in case.authority or "example case" in case.prepared_by


def test_that_every_number_about_the_world_says_where_it_came_from(raw):
    unsaid = [
        at
        for at, number in _numbers(raw)
        if not _is_chosen(at)
        and not (isinstance(number, dict) and number.get("origin") and number.get("source"))
    ]
    assert unsaid == []


def test_that_a_borrowed_number_names_its_source_with_a_year_or_a_caveat(raw):
    borrowed = [n for _, n in _numbers(raw) if isinstance(n, dict) and n["origin"] == "borrowed"]
    assert borrowed
    for number in borrowed:
        words = number["source"]
        assert any(year in words for year in ("19", "20")) or "no source" in words, words


def test_that_the_decision_targets_and_donors_are_described(case):
    decision = case.decision
    for said in (
        decision.question,
        decision.decided_by,
        decision.by_date,
        decision.goal,
        decision.other_causes_of_decline,
        case.currency,
        case.recipient.who_is_counted,
    ):
        assert said
    assert case.targets
    assert all(target.owner and target.reason for target in case.targets)
    for donor in case.donors:
        assert donor.screen is not None
        assert donor.disease_status
        assert donor.adults is not None
        assert donor.most_removed_per_year is not None
        assert donor.fewest_left is not None


def test_that_a_case_compares_three_to_five_plans(case):
    assert 3 <= len(case.plans) <= 5
    assert case.plans[0].name == "No releases"


def test_that_generation_length_agrees_with_the_life_table(case):
    """The program remarks on more than 15 %; a shipped case stays within that."""
    if case.life_cycle is None:
        pytest.skip("this case has no life cycle, on purpose")
    mothers = float(life_table.mean_age_of_mothers(*_life_numbers(case.life_cycle)))
    assert float(case.time.generation_years.best) == pytest.approx(mothers, rel=0.15)


def test_that_the_survival_of_outbred_young_implied_is_believable(case):
    """First-year survival without inbreeding, exp(B F / 2) times the one given, stays under 0.7."""
    if case.life_cycle is None:
        pytest.skip("this case has no life cycle, on purpose")
    who, load_ = case.recipient, case.inbreeding_cost.lethal_equivalents_diploid.first_year.best
    f = 1 - who.gene_diversity.best / who.reference_gene_diversity.best
    outbred = case.life_cycle.yearly_survival.first_year.best * np.exp(load_ / 2 * f)
    assert 0.1 < outbred < 0.7


def test_that_growth_stays_within_what_such_animals_can_do(case):
    """Yearly growth above 1.2 would be more than these life cycles give even without crowding."""
    if case.life_cycle is None:
        pytest.skip("this case has no life cycle, on purpose")
    result = compare(case, depths=("expected",))
    for plan in result.plans:
        assert result.get(plan, "expected", "yearly_growth").values.max() < 1.2
    assert result.capped == ()


def test_that_a_remark_on_a_shipped_case_is_answered_or_belongs_to_its_lesson(case):
    left = [r for r in every_remark(case) if answer_to(case, r) is None]
    assert [r.name for r in left if r.key not in LESSONS | NOTICES] == []
    names = {remark.name for remark in every_remark(case)}
    assert {answer.remark for answer in case.answers} <= names


def test_that_the_chain_s_mean_of_a_neutral_locus_is_the_expected_mean(raw):
    """Drift without selection leaves the mean alone, so only flow moves it, at both depths.

    Tolerance: rounding of sums over a few hundred states.
    """
    donors = [donor["name"] for donor in raw["donors"]]
    raw["loci"] = [
        {
            "name": "Neutral",
            "role": "neutral",
            "frequency": 0.3,
            "donor_frequency": {name: 0.9 - 0.3 * i for i, name in enumerate(donors)},
        }
    ]
    raw["targets"] = []
    raw["answers"] = []
    raw["what_ifs"] = []
    result = compare(read_case(raw))
    moved = 0.0
    for plan in result.plans:
        exact = result.get(plan, "exact", "allele_frequency:Neutral").values
        expected = result.get(plan, "expected", "allele_frequency:Neutral").values
        np.testing.assert_allclose(exact, expected, rtol=0, atol=1e-10)
        moved = max(moved, float(np.ptp(expected)))
    assert moved > 0.05  # some plan moves the mean, so the agreement says something


def test_that_the_cases_together_use_what_a_case_can_hold():
    cases = [load(path).case for path in PATHS]
    plans = [plan for case in cases for plan in case.plans]
    assert any(case.life_cycle is None for case in cases)
    assert any(case.recipient.effective_size_follows_adults for case in cases)
    assert any(donor.fst_form == "nei" for case in cases for donor in case.donors)
    assert any(donor.drifts for case in cases for donor in case.donors)
    assert any(case.trait is not None for case in cases)
    assert any(not float(case.time.generation_years.best).is_integer() for case in cases)
    assert {rule.then for plan in plans for rule in plan.rules} == {"stop", "release"}
    assert any(plan.steady for plan in plans)
    assert any(action.cost.best > 0 for plan in plans for action in plan.other_actions)
    assert {locus.role for case in cases for locus in case.loci} >= {
        "locally adapted",
        "resistance",
    }


@pytest.mark.slow
def test_that_run_writes_the_projection_of_a_case(path, tmp_path, capsys):
    assert cli.main(["run", str(path), "--to", str(tmp_path), "--depth", "expected"]) == 0
    written = (tmp_path / "projection.csv").read_text(encoding="utf-8").splitlines()
    assert written[0].startswith("plan,depth,year,generation,measure,statistic,value")
    assert {line.split(",")[0].strip('"') for line in written[1:]} >= {"No releases"}
    capsys.readouterr()


def test_that_check_finds_no_problems(path, capsys):
    assert cli.main(["check", str(path)]) == 0
    assert "no problems" in capsys.readouterr().out
