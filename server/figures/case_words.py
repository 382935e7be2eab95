"""Which case a scenario shows, and how a case and its running pumps are named."""

import numpy as np

from server.hydraulics.states import State
from server.studies.assess import Assessment
from server.studies.duty_result import DutyResult, Place
from server.studies.findings.judge_suction import PLACE_WORDS
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import SUPPLY_STATES, SupplyState

SHORT_SET = 3  # so many running slots are named one by one


def judged_set(assessment: Assessment, set_id: str | None) -> JudgedSet | None:
    """Return the solved set with its criteria, None when it is not solved."""
    result = assessment.for_set(set_id) if set_id else None
    entered = next((s for s in assessment.station.sets if s.id == set_id), None)
    if not isinstance(result, DutyResult) or entered is None:
        return None
    return JudgedSet(assessment.station, assessment.criteria, entered, result)


def case_index(
    result: DutyResult, scenario: str | None, supply: SupplyState | None = None
) -> int | None:
    """Return the case of a scenario in a supply state, its own when none is asked for.

    Returns
    -------
    int or None
        None when the scenario has no such case.
    """
    for index, case in enumerate(result.cases):
        if case.scenario == scenario and (
            bool(result.shown[index]) if supply is None else case.supply == supply
        ):
            return index
    return None


def three_cases(result: DutyResult, scenario: str) -> tuple[int, ...]:
    """Return the cases of a scenario at low, normal and high supply, those that there are."""
    found = (case_index(result, scenario, state) for state in SUPPLY_STATES)
    return tuple(index for index in found if index is not None)


def stage_cases(result: DutyResult, scenario: str) -> tuple[int, ...]:
    """Return the further cases of a scenario: other numbers running, as a level starts them."""
    three = set(three_cases(result, scenario))
    return tuple(
        index
        for index, case in enumerate(result.cases)
        if case.scenario == scenario and index not in three
    )


def scenarios_of(result: DutyResult) -> tuple[str, ...]:
    """Return the scenarios of a result in their order."""
    return tuple(dict.fromkeys(case.scenario for case in result.cases))


def scenario_title(judged: JudgedSet, scenario: str) -> str:
    """Return the name of a scenario."""
    for entered in judged.station.scenarios:
        if entered.id == scenario:
            return entered.title or "Scenario without a name"
    return scenario


def state_words(judged: JudgedSet, case: int) -> str:
    """Return the state of a case: "low supply, aged pipes, P4 out"."""
    of = judged.result.cases[case]
    told = f"{of.supply} supply, {of.pipes} pipes"
    return f"{told}, {slot_title(judged, of.out)} out" if of.out else told


def case_words(judged: JudgedSet, case: int) -> str:
    """Return a case in words: scenario and state."""
    title = scenario_title(judged, judged.result.cases[case].scenario)
    return f"{title}, {state_words(judged, case)}"


def slot_title(judged: JudgedSet, slot: str) -> str:
    """Return the short name of a slot."""
    for index, facts in enumerate(judged.result.slots):
        if facts.id == slot:
            return judged.slot_title(index)
    return slot


def running_slots(judged: JudgedSet, case: int) -> tuple[int, ...]:
    """Return the slots of the chosen combination of a case."""
    chosen = int(judged.result.chosen[case])
    return (
        ()
        if chosen < 0
        else tuple(int(n) for n in np.flatnonzero(judged.result.combinations[chosen]))
    )


def running_words(judged: JudgedSet, case: int) -> str:
    """Return which pumps run: "P1 + P2", or "4 running"."""
    slots = running_slots(judged, case)
    if not slots:
        return "none running"
    if len(slots) > SHORT_SET:
        return f"{len(slots)} running"
    return " + ".join(judged.slot_title(n) for n in slots)


def no_duty_words(judged: JudgedSet, case: int) -> str:
    """Return why a case has no duty, as a sentence."""
    result = judged.result
    chosen = int(result.chosen[case])
    usable = (
        [chosen] if chosen >= 0 else [int(k) for k in np.flatnonzero(result.available[case])]
    )
    states = {State(int(result.state[case, k])) for k in usable}
    place = judged.dry.get(case, Place.NOWHERE)
    if place is not Place.NOWHERE:
        return f"No water at {PLACE_WORDS[place]}: nothing can be pumped."
    if not usable:
        return "No pump is available in this state."
    if State.END_OF_CURVE in states:
        return "Past the end of a pump's curve: no duty is stated."
    if State.BELOW_STATIC in states:
        return "No pump reaches the head that is asked at no flow: nothing flows."
    if State.HELD_SHUT in states:
        return "A pump is held shut by the others: no duty is stated."
    return "No duty could be found in this state."


def combination_words(judged: JudgedSet, combination: int) -> str:
    """Return a combination by its kinds of pump: "three Main M", "Jockey J"."""
    kinds: dict[str, int] = {}
    for n in np.flatnonzero(judged.result.combinations[combination]):
        kinds[judged.pump_title(int(n))] = kinds.get(judged.pump_title(int(n)), 0) + 1
    return " and ".join(
        title if number == 1 else f"{_number(number)} {title}"
        for title, number in kinds.items()
    )


def _number(count: int) -> str:
    names = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight")
    return names[count] if count < len(names) else str(count)
