"""Who answers for a pack: the roles, in the order in which they sign."""

from __future__ import annotations

from typing import Literal, get_args

Role = Literal["prepared", "checked", "approved"]
ROLES: tuple[Role, ...] = get_args(Role)
PERSON: dict[Role, str] = {"prepared": "preparer", "checked": "checker", "approved": "approver"}


def as_role(text: str) -> Role:
    """A role by its name.

    Examples
    --------
    >>> as_role("checked")
    'checked'
    """
    return next(role for role in ROLES if role == text)


def needed_roles(check_level: str, approver: str) -> tuple[Role, ...]:
    """Roles that must have signed before a pack is issued.

    Parameters
    ----------
    check_level : str
        "self", "second person" or "third party".
    approver : str
        The name of the approver where the job names one.

    Examples
    --------
    >>> needed_roles("second person", "")
    ('prepared', 'checked')
    >>> needed_roles("self", "A. Lind")
    ('prepared', 'approved')
    """
    roles: list[Role] = ["prepared"]
    if check_level != "self":
        roles.append("checked")
    if approver:
        roles.append("approved")
    return tuple(roles)
