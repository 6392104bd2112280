"""How a steel section came to be chosen from its family, in words."""

from __future__ import annotations

from collections import Counter

from calcpack.job.model import Section, Tried

REASONS = 3  # so many are told apart when many sections fail


def chosen_words(section: Section) -> str:
    """How a section came to be the one: how many lighter ones were tried, what fails with the next lighter.

    Parameters
    ----------
    section : Section
        Chosen from its family: ``tried`` holds the lighter ones, lightest first; or all, if none passes.

    Examples
    --------
    >>> from calcpack.job.library import rolled_sections
    >>> from calcpack.job.model import Tried
    >>> tried = [Tried(designation="W8X10", fails="shear", ratio=1.6)]
    >>> tried += [Tried(designation="W10X12", fails="bending, span", ratio=1.234)]
    >>> found = rolled_sections()["w12x14"].model_copy(update={"family": "W", "tried": tuple(tried)})
    >>> print(chosen_words(found))
    W12X14 is the lightest W section that passes all checks of this sheet. The 2 lighter ones were tried and \
fail (1 in bending, span; 1 in shear). Next lighter: W10X12, bending, span, ratio 1.23.
    >>> print(chosen_words(found.model_copy(update={"fits": False})))
    None of the 3 W sections passes all checks of this sheet; W12X14 comes nearest and is shown with what it \
lacks.
    """
    family, tried = section.family, section.tried
    if not section.fits:
        return (
            f"None of the {len(tried) + 1} {family} sections passes all checks of this sheet; "
            f"{section.designation} comes nearest and is shown with what it lacks."
        )
    if not tried:
        return (
            f"{section.designation} is the lightest of all {family} sections and passes all checks of this "
            "sheet."
        )
    counted = Counter(each.fails for each in tried).most_common()
    reasons = "; ".join(f"{count} in {fails}" for fails, count in sorted(counted[:REASONS]))
    others = sum(count for _, count in counted[REASONS:])
    reasons += f"; {others} in other checks" if others else ""
    lighter = (
        "The one lighter was tried and fails"
        if len(tried) == 1
        else (f"The {len(tried)} lighter ones were tried and fail")
    )
    return (
        f"{section.designation} is the lightest {family} section that passes all checks of this sheet. "
        f"{lighter} ({reasons}). Next lighter: {_said(tried[-1])}."
    )


def _said(each: Tried) -> str:
    ratio = f"{each.ratio:.2f}" if round(each.ratio, 2) > 1 else f"{each.ratio:.5g}"
    return f"{each.designation}, {each.fails}, ratio {ratio}"
