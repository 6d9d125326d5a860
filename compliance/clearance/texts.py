"""What a person is told: first steps where something went wrong, cautions, what nobody but them can answer."""

FIRST_STEPS = (
    "Everyone out, and warn others. Shut off from outside only. Call the emergency number.",
    "Nobody returns without breathing apparatus; oxygen is given by trained people.",
    "Follow your local rules and the written instruction of this workplace.",
)
"""What to do first where liquids met that must never meet."""

SPILL_STEPS = (
    "Warn others and keep them out. If it fumes, or nobody knows what it is: everyone out, and call for help.",
    "Gloves, goggles, apron and boots before anybody goes near; ventilation on; never alone.",
    "Stop the source if that is safe. Keep it out of drains, and acid away from cyanide.",
    "Take it up with the absorbent of the spill kit for this liquid, into a container of its own stream.",
    "If it reached a drain or the ground, your local rules say whom to tell and how soon.",
)
"""What to do first where something was spilled (common practice)."""

TREATMENT_CAUTIONS = (
    "A treatment plan is arithmetic, not permission: a permit or licensed practice may be needed. Ask first.",
    "Neutralising heats and foams. Acid goes into water, never water into acid; slowly, stirred, with ventilation on.",
    "Gas may come off, also later: leave the vessel vented.",
    "With complexants in it, metal stays dissolved. Only an analysis of the filtrate says how much metal is left.",
)
"""What anybody who treats a batch should know (rules that are never soft)."""

ONLY_IN_A_LICENSED_PLAN = (
    "Cyanide meets an oxidiser in a licensed destruction plan only, step by step; no such plan is adopted here."
)

SEWER = (
    "Whether this may go to the sewer is for your permit and your local rules: no permit line is adopted here. "
    "Dilution never counts."
)
"""What a person answers for who discharges."""

OTHER_PRODUCT = (
    "%(source)s is a container of %(product)s, %(target)s one of %(other)s: its label would be wrong, and what "
    "is in it may react. Set up a container for %(product)s instead, and label it. Shall it be poured in all the same?"
)
"""Asked before one product is poured into a container of another."""

NOT_CALIBRATED = (
    "The calibration of %(instrument)s was valid until %(until)s. The reading is kept as it is; check the instrument "
    "before anything is decided by it."
)
"""Said of a reading with an instrument whose calibration ran out."""
