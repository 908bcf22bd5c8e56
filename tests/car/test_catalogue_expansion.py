"""What the catalogue builds, and what it says it left out."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.catalogue_car import POINTS, G, by_name, equipped, spec
from car.worked_car import CAR, manoeuvre

from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.car.catalogue.coverage import coverage, ends
from blockload.car.catalogue.expanding import BUILDERS, expand, expansion
from blockload.car.catalogue.figures import static_loads
from blockload.car.grip_notes import grip_notes
from blockload.case.factors import DEFAULTS
from blockload.case.groups import GROUPS, spelled_out
from blockload.case.model import CatalogueSpec, Factor, GivenForce, Performance
from blockload.errors import CaseError


def test_every_group_has_a_builder_and_no_builder_is_without_a_group() -> None:
    assert tuple(BUILDERS) == GROUPS


def test_every_situation_is_built_when_every_figure_is_known() -> None:
    found = expansion(equipped("all", catalogue=spec("all", forces={"rear_impact": blow((2e5, 0, 0))})))

    assert found.omissions == ()
    assert {item.group for item in found.manoeuvres} == set(GROUPS)


def test_every_load_case_is_balanced_and_agrees_from_front_and_rear() -> None:
    cases = balance(equipped("all", catalogue=spec("all", forces={"rear_impact": blow((2e5, 0, 0))})))

    assert cases.residual.max() < 1e-12
    assert cases.front_rear_gap.max() < 1e-12


def test_performance_alone_builds_the_whole_steady_set() -> None:
    bare = Performance(speed=75.0, lateral=20.0, braking=30.0, traction=9.0)
    found = expansion(replace(CAR, manoeuvres=(), performance=bare, catalogue=spec("steady")))

    assert found.omissions == ()
    assert set(by_name(found.manoeuvres)) == {
        "v_max",
        *(f"corner_{word}_{side}" for word in ("fast", "slow") for side in ("left", "right")),
        "brake",
        *(f"{word}_{side}" for word in ("brake_in_corner", "power_in_corner") for side in ("left", "right")),
        "crest",
        "compression",
    }


def test_kerbs_are_met_at_each_wheel_and_both_diagonals() -> None:
    names = set(by_name(expand(equipped("kerb"))))

    assert {"kerb_FL", "kerb_FR", "kerb_RL", "kerb_RR", "kerb_FL_RR", "kerb_FR_RL"} <= names


@pytest.mark.parametrize("group", GROUPS)
def test_a_car_that_tells_nothing_gets_omissions_that_say_what_to_add(group: str) -> None:
    bare = replace(CAR, manoeuvres=(), catalogue=spec(group))
    found = expansion(bare)

    if group in ("spin", "twist_rig", "bending_rig"):  # these need the car alone
        assert found.manoeuvres
        assert not found.omissions
        return
    assert found.omissions
    assert not found.manoeuvres
    assert all(gap.group == group and gap.why and gap.remedy for gap in found.omissions)


@pytest.mark.parametrize(
    ("group", "taken", "situation"),
    [
        ("jack", "jacks.", "jack"),
        ("crane", "hoop", "crane_hoop"),
        ("trolley", "trolley.rear", "trolley"),
        ("towing", "towing.", "towing"),
        ("roll_structure", "hoop", "roll_structure"),
        ("rear_impact", "impact", "rear_impact"),
    ],
)
def test_a_missing_point_is_a_listed_omission_that_names_the_table(group: str, taken: str, situation: str) -> None:
    left = {name: item for name, item in POINTS.items() if not name.startswith(taken)}
    (gap,) = expansion(equipped(group, points=left)).omissions

    assert gap.situation == situation
    assert "[points." in gap.remedy


def test_a_rear_impact_without_the_class_force_has_no_default() -> None:
    (gap,) = expansion(equipped("rear_impact")).omissions

    assert "[catalogue.forces.rear_impact]" in gap.remedy


def test_the_coverage_table_shows_groups_covered_in_part_left_out_and_not_asked_for() -> None:
    case = equipped("jack", "crane", "launch", points={}, performance=Performance(traction=9.0))
    status = {row.group: row.status for row in coverage(case)}

    assert tuple(status) == GROUPS
    assert (status["jack"], status["launch"], status["kerb"]) == ("left out", "in part", "not asked for")
    assert {row.group: row.status for row in coverage(equipped("jack"))}["jack"] == "covered"


def test_a_manoeuvre_of_the_case_stands_in_for_the_catalogues_of_the_same_name() -> None:
    own = manoeuvre("brake", speed=50.0, acceleration=(-20.0, 0, 0), drive="brake")
    case = equipped("brake", manoeuvres=(own,))
    cases = balance(case)

    assert cases.names == ("brake",)
    assert cases.speed[0] == 50.0
    assert next(row for row in coverage(case) if row.group == "brake").load_cases == ("brake (the case's own)",)


def test_a_sign_that_never_turns_names_the_situation_that_would_turn_it() -> None:
    """A catalogue without lifting never pulls the top of the front face; one with a crane does."""
    driven = ends(balance(equipped("v_max", "brake", "corner")))
    lifted = ends(balance(equipped("v_max", "brake", "corner", "crane")))

    def sag(rows):  # type: ignore[no-untyped-def]
        return next(row for row in rows if (row.face, row.component) == ("front", "M_sag"))

    assert not sag(driven).turns
    assert "crane" in sag(driven).missing
    assert sag(lifted).turns
    assert sag(lifted).least_case == "crane_hoop"


def test_the_air_is_never_multiplied_by_a_dynamic_factor() -> None:
    """Doubling the factor adds static loads alone: what every device does to the faces stays as the speed makes it."""
    for group in ("kerb", "landing", "crest"):
        name = "kerb" if group == "kerb" else "vertical"
        once, twice = (balance(equipped(catalogue=spec(group, factors={name: of(name, n)}))) for n in (2.0, 4.0))

        devices = [s for s, source in enumerate(once.sources) if source.startswith("aero.")]
        assert len(devices) == len(CAR.devices)
        for face in ("front", "rear"):
            air = [cases.faces[face].wrench[:, devices] for cases in (once, twice)]
            np.testing.assert_allclose(air[0], air[1], atol=1e-9)
        assert np.abs(once.section("front") - twice.section("front")).max() > 100.0


def test_a_landing_brings_each_wheel_to_the_factor_times_its_static_load_plus_real_aero() -> None:
    case = equipped("landing", drive=replace(CAR.drive, crank_inertia=None))
    cases = balance(case)
    rolling = balance(case, (manoeuvre("rolling", speed=60.0, drive="coast"),))
    aero = rolling.wheels[0, :, 2] - static_loads(case)

    landed = cases.wheels[cases.names.index("landing"), :, 2]
    np.testing.assert_allclose(landed, DEFAULTS["vertical"].value * static_loads(case) + aero, rtol=1e-12)


def test_a_compression_multiplies_weight_once() -> None:
    """The body sees n times its weight: inertia adds n - 1 to the one that gravity makes."""
    cases = balance(equipped("crest"))
    c = cases.names.index("compression")
    car = masses(CAR)

    assert cases.wheels[c, :, 2].sum() == pytest.approx(3.0 * car.total * G + cases.downforce[c], rel=1e-12)


def test_a_given_compression_is_not_multiplied_again() -> None:
    """A measured vertical acceleration holds its dynamics already: no factor is laid over it."""
    known = replace(equipped().performance, compression=12.0)
    case = equipped(performance=known, catalogue=spec("crest", factors={"vertical": of("vertical", 5.0)}))
    compression = by_name(expand(case))["compression"]

    assert compression.acceleration[2] == 12.0
    assert compression.factor is None


def test_every_factor_has_a_source_and_every_blow_a_basis() -> None:
    assert all(item.source for item in DEFAULTS.values())
    for item in expand(equipped("all")):
        assert item.basis, item.name
        if item.factor is not None:
            assert item.factor.source in item.basis


def test_a_measured_kerb_force_is_used_as_it_stands_and_mirrored_to_the_right() -> None:
    measured = blow((-2e3, 500.0, 12e3))
    found = by_name(expand(equipped(catalogue=spec("kerb", forces={"kerb": measured}))))

    np.testing.assert_array_equal(found["kerb_RL"].extra_wheel_force["RL"], (-2e3, 500.0, 12e3))
    np.testing.assert_array_equal(found["kerb_RR"].extra_wheel_force["RR"], (-2e3, -500.0, 12e3))
    assert found["kerb_RL"].factor is None
    assert found["kerb_RL"].basis == "invented"


def test_limit_situations_are_no_fatigue_cycles_and_service_ones_are() -> None:
    kinds = {item.name: (item.kind, item.fatigue_exempt) for item in expand(equipped("all"))}

    assert all(exempt for kind, exempt in kinds.values() if kind == "limit")
    assert kinds["spin_RL"] == ("limit", True)
    assert kinds["corner_fast_left"] == ("service", False)
    assert kinds["jack_rear"] == ("service", True)


def test_a_corner_beyond_grip_is_said_by_axle() -> None:
    """Cornering at 4 g on tyres of 1.7: both axles are named with how much of their grip is asked."""
    much = replace(equipped().performance, lateral=4.0 * G)
    case = equipped("corner", performance=much)
    notes = list(grip_notes(case, balance(case)))

    assert any(note.startswith("corner_fast_left") and "front axle" in note for note in notes)
    case = equipped("corner", performance=replace(much, lateral=1.5 * G))
    assert not list(grip_notes(case, balance(case)))


def test_a_jack_that_would_tip_the_car_is_marked_as_no_state_of_it() -> None:
    """A rear jack ahead of the CG leaves the front wheels to pull: the case says so instead of passing."""
    wrong = {"jacks.rear": replace(POINTS["jacks.rear"], on="tub", at=np.array((-1.0, 0.0, 0.2)))}
    cases = balance(equipped("jack", points=wrong))

    assert cases.wheel_lift.all()
    assert not balance(equipped("jack")).wheel_lift.any()


def test_supports_that_leave_the_car_free_are_refused_by_name() -> None:
    jack = by_name(expand(equipped("jack")))["jack_rear"]
    with pytest.raises(CaseError, match="free to move"):
        balance(CAR, (replace(jack, supports=jack.supports[:2]),))


def test_lower_gears_turn_the_crank_no_faster_than_it_can() -> None:
    case = equipped("all")
    radius = case.axles["rear"].loaded_radius
    for item in expand(case):
        if item.overall_ratio is not None and case.engine.max_speed is not None:
            assert item.speed * item.overall_ratio / radius <= case.engine.max_speed * (1 + 1e-6), item.name


def test_a_shift_passes_what_the_clutch_or_the_tyres_hold_whichever_is_less() -> None:
    cases = balance(equipped("shift"))
    torque = dict(zip(cases.names, cases.crank_torque, strict=True))

    assert torque["shift_2_3"] == pytest.approx(900.0, rel=1e-9)  # clutch capacity
    assert torque["shift_1_2"] < 900.0  # tyre grip in a low gear


def test_collections_spell_out_once_and_in_order() -> None:
    assert spelled_out(["all"]) == GROUPS
    assert spelled_out(["crane", "handling", "v_max"]) == ("v_max", "jack", "crane", "trolley", "towing")


def blow(force: tuple[float, float, float]) -> GivenForce:
    return GivenForce(force=np.array(force, dtype=float), basis="invented")


def of(name: str, value: float) -> Factor:
    return Factor(name=name, value=value, of="static wheel load", source="invented")


def test_no_catalogue_means_the_cases_own_manoeuvres_alone() -> None:
    assert expand(CAR) == ()
    assert balance(CAR).names == tuple(item.name for item in CAR.manoeuvres)
    assert CatalogueSpec(groups=()).factors == {}
