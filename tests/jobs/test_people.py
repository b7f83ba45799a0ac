"""People, companies and crews: kept, closed, never deleted."""

from __future__ import annotations

import pytest

from jobs.actions.people import (
    add_company,
    add_person,
    change_person,
    deactivate_person,
    keep_crew,
    reactivate_person,
)
from jobs.models import CompanyKind, Crew, FirmRole, FirmSpell, User
from stakes.record import Refused
from tests.jobs.cast import Cast


def test_an_e_mail_belongs_to_one_person_whatever_its_case(cast: Cast) -> None:
    with pytest.raises(Refused) as refused:
        add_person(
            email=" MANAGER@Example.com", name="Second", company=cast.mason.company
        )

    assert refused.value.field == "email"


def test_a_new_person_cannot_sign_in_before_setting_a_password(cast: Cast) -> None:
    assert not cast.crew.has_usable_password()


@pytest.mark.parametrize("email", ["", "nobody", "a@b@c", "x" * 300 + "@example.com"])
def test_what_is_no_address_is_refused(cast: Cast, email: str) -> None:
    with pytest.raises(Refused) as refused:
        add_person(email=email, name="Somebody", company=cast.crew.company)

    assert refused.value.field == "email"


def test_people_of_other_companies_get_no_role_in_the_firm(cast: Cast) -> None:
    with pytest.raises(Refused) as refused:
        add_person(
            email="new@example.com",
            name="New",
            company=cast.contractor.company,
            firm_role=FirmRole.SURVEYOR,
        )

    assert refused.value.field == "firm_role"
    assert not User.objects.filter(email="new@example.com").exists()


def test_the_last_manager_stays(cast: Cast) -> None:
    with pytest.raises(Refused):
        deactivate_person(person=cast.manager)
    with pytest.raises(Refused):
        change_person(
            person=cast.manager,
            email=cast.manager.email,
            name="Manager",
            firm_role=FirmRole.CREW,
        )

    assert User.objects.get(pk=cast.manager.pk).is_manager


def test_a_second_manager_lets_the_first_go(cast: Cast) -> None:
    change_person(
        person=cast.surveyor,
        email=cast.surveyor.email,
        name="Surveyor",
        firm_role=FirmRole.PRINCIPAL,
    )
    deactivate_person(person=cast.manager)
    reactivate_person(person=cast.manager)

    assert User.objects.get(pk=cast.manager.pk).is_active


def test_a_change_of_role_keeps_the_spell_before_it(cast: Cast) -> None:
    change_person(
        person=cast.crew,
        email=cast.crew.email,
        name=cast.crew.name,
        firm_role=FirmRole.SURVEYOR,
    )

    spells = FirmSpell.objects.filter(person=cast.crew)
    assert [(s.role, s.until is None) for s in spells] == [
        ("crew", False),
        ("surveyor", True),
    ]


def test_a_company_is_kept_once(cast: Cast) -> None:
    with pytest.raises(Refused) as refused:
        add_company(name="harbour builders ", kind=CompanyKind.TRADE)

    assert refused.value.field == "name"


def test_a_crew_is_of_one_company_and_holds_its_chief(cast: Cast) -> None:
    firm = cast.crew.company
    crew = keep_crew(
        name="North", company=firm, party_chief=cast.party_chief, members=[cast.crew]
    )
    assert set(crew.members.all()) == {cast.party_chief, cast.crew}

    with pytest.raises(Refused) as refused:
        keep_crew(
            name="Mixed",
            company=firm,
            party_chief=cast.party_chief,
            members=[cast.subcontractor],
        )
    assert refused.value.field == "members"
    assert Crew.objects.count() == 1
