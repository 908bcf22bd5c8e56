"""The cautions every result carries: what it is not, what nobody judged, what must happen before the car runs."""

from __future__ import annotations

from ..case.model import Case

SCOPE = (
    "Linear elastic, idealised geometry, loads as given. Not a substitute for test, for the class rules, for local "
    "codes, or for sign-off by a licensed engineer. A structural failure of a stressed engine can kill."
)
NEVER_JUDGED = (
    "crash and occupant protection",
    "roll structure",
    "fire",
    "oil or fuel leaks",
    "a failed engine",
    "loss of an axle",
)
NOT_PERMISSION = (
    "This result is not permission to drive. Before first running: proof load in twist and in bending, crack check and "
    "stud re-torque. After it: inspection of bosses, studs and leaks at stated intervals."
)
VALIDITY = "Valid only for the inputs with the hashes shown."
ONE_LINE = (
    "Not permission to drive: no substitute for test, class rules, local codes or a licensed engineer; "
    "a stressed engine that breaks can kill."
)
CONSENT = {
    "given": "The engine maker's consent to chassis loads: given.",
    "not given": "The engine maker's consent to chassis loads: NOT GIVEN.",
    "not asked": "The engine maker's consent to chassis loads: not asked. Ask before the first bolt goes in.",
}


def consent(case: Case) -> str:
    """Return the sentence on the engine maker's consent."""
    return CONSENT.get(case.engine_maker_consent, CONSENT["not asked"])


def cautions(case: Case) -> tuple[str, ...]:
    """Return all cautions of the first page, in order."""
    return (
        SCOPE,
        f"Not judged here: {', '.join(NEVER_JUDGED)}.",
        consent(case),
        NOT_PERMISSION,
        VALIDITY,
    )
