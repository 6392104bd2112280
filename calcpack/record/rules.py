"""Who may sign as what: the order of the roles, the persons, the level of checking.

Source: EN 1990:2002 Annex B, Table B4, from memory (design supervision levels: self-checking, checking by
other persons than those originally responsible, third-party checking by another organisation).
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Sequence

from calcpack.job.errors import CalcpackError, Problem
from calcpack.record.certificates import Certificate
from calcpack.record.roles import PERSON, Role
from calcpack.record.signatures import SignatureReport, of_role, same_person
from calcpack.record.statement import Statement


def hindrances(
    statement: Statement, role: Role, certificate: Certificate, signatures: Sequence[SignatureReport]
) -> tuple[str, ...]:
    """What stands against signing, but may be answered for with a reason.

    Parameters
    ----------
    statement : Statement
    role : Role
    certificate : Certificate
        Of whoever wants to sign.
    signatures : sequence of SignatureReport
        Those already there.

    Returns
    -------
    tuple of str
        Requirements not satisfied; a signer who is not the one the job names.

    Raises
    ------
    CalcpackError
        The role has been signed, comes too early, or this person may not sign it.
    """
    problems = list(_order(statement, role, signatures))
    preparer = of_role(signatures, "prepared")
    soft: list[str] = []
    if role == "checked" and statement.check_level != "self" and preparer and preparer.certificate:
        before = preparer.certificate
        if same_person(before, certificate):
            problems.append(
                Problem(
                    f"{certificate.name} signed as the one who prepared this; the level of checking is"
                    f" '{statement.check_level}'",
                    "somebody else has to check",
                )
            )
        elif _words(before.name) == _words(certificate.name):
            soft.append(f"preparer and checker are both called {certificate.name}")
        if statement.check_level == "third party":
            soft += _organisations(before, certificate, problems)
    if problems:
        raise CalcpackError(*problems)
    named = statement.person(role).name
    if named and not same_name(named, certificate.name):
        soft.append(f"the job names {named} as {PERSON[role]}, the certificate is {certificate.name}'s")
    return (*_unmet(statement), *soft)


def _unmet(statement: Statement) -> tuple[str, ...]:
    return tuple(f"not satisfied: {text}" for text in statement.unmet)


def _order(statement: Statement, role: Role, signatures: Sequence[SignatureReport]) -> list[Problem]:
    if there := of_role(signatures, role):
        return [Problem(f"{there.name} has signed this as {role} already")]
    before: dict[Role, tuple[Role, ...]] = {
        "prepared": (),
        "checked": ("prepared",),
        "approved": ("prepared",) if statement.check_level == "self" else ("prepared", "checked"),
    }
    missing = [each for each in before[role] if of_role(signatures, each) is None]
    if missing:
        return [
            Problem(
                f"nobody has signed this as {' and '.join(missing)} yet",
                f"first prepared, then checked, then approved (level of checking: {statement.check_level})",
            )
        ]
    later: dict[Role, tuple[Role, ...]] = {"prepared": (), "checked": ("approved",), "approved": ()}
    if any(of_role(signatures, each) for each in later[role]):
        return [Problem(f"this is approved already; it cannot be {role} any more")]
    return []


def _organisations(before: Certificate, certificate: Certificate, problems: list[Problem]) -> list[str]:
    if not (before.organisation and certificate.organisation):
        return ["a third party has to check, and a certificate names no organisation"]
    if _words(before.organisation) == _words(certificate.organisation):
        problems.append(
            Problem(
                f"preparer and checker are both of {certificate.organisation}; the level of checking is"
                " 'third party'",
                "somebody of another organisation has to check",
            )
        )
    return []


def same_name(named: str, signed: str) -> bool:
    """Whether a certificate's name can be that of the person a job names.

    Order, accents, titles and initials aside.

    Examples
    --------
    >>> same_name("M. Ravn", "Dr. Maria Ravn"), same_name("Ångström, Per", "PER ANGSTROM")
    (True, True)
    >>> same_name("M. Ravn", "I. Okoro"), same_name("M. Ravn", "Maria Ravnsborg")
    (False, False)
    """
    less, more = sorted((_words(named), _words(signed)), key=len)
    return bool(less) and all(any(_alike(word, other) for other in more) for word in less)


def _alike(word: str, other: str) -> bool:
    short, long = sorted((word, other), key=len)
    return word == other or (len(short) == 1 and long.startswith(short))


def _words(text: str) -> frozenset[str]:
    plain = unicodedata.normalize("NFKD", text).casefold()
    plain = "".join(letter for letter in plain if not unicodedata.combining(letter))
    return frozenset(re.findall(r"\w+", plain))
