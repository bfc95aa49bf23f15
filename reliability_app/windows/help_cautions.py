"""What each caution means and what to do about it: the help on a caution, by its code."""

from __future__ import annotations

from reliability_app.windows.help_texts import Term


def _about(code: str, title: str, text: str) -> Term:
    return Term(f"caution {code}", title, text, also=f"caution {code}")


CAUTIONS = (
    _about(
        "one-failure",
        "Only one failure",
        "One failure fixes a scale and says nearly nothing of the shape, so readings away from it are guesses. "
        "Wait for more failures, or hold a shape that is known from earlier tests.",
    ),
    _about(
        "very-few-failures",
        "Very few failures",
        "From so few failures the families cannot be told apart, and all bounds are wide. More failures help "
        "most; longer running of the others helps next.",
    ),
    _about(
        "few-failures",
        "Few failures",
        "The fit is usable, but the choice of family is hardly supported by the units. Look at the candidates "
        "and at how far their readings differ.",
    ),
    _about(
        "below-first-failure",
        "Reading below the first failure",
        "The reading lies at an age at which nothing failed yet, so it follows the curve of the family into a "
        "range without failures. Another family that fits as well may say something quite different there.",
    ),
    _about(
        "beyond-last-observation",
        "Reading beyond the last observation",
        "No unit was watched to this age, so the reading is where the family continues, not what was seen. A "
        "failure mode that begins later would not show.",
    ),
    _about(
        "life-not-positive",
        "Life not above 0",
        "A family of life itself, such as the normal, reaches below age 0 at small percents, where no life can "
        "lie. Choose a family of ln life: lognormal, Weibull or loglogistic.",
    ),
    _about(
        "lives-below-zero",
        "Family with lives below 0",
        "The fitted family gives a noticeable share of units a life below 0, so its readings at small percents "
        "come too early. Choose a family of ln life.",
    ),
    _about(
        "shape-assumed",
        "Shape not estimated",
        "The shape was given, or is fixed by the family, and the bound allows for no error in it. Try a smaller "
        "and a greater one and quote the less favourable result.",
    ),
    _about(
        "bound-without-failure",
        "Bound without a failure",
        "Units that all ran without failing give no estimate, but they do bound the life from below if the shape "
        "is known from elsewhere. Hold a Weibull shape, or choose the exponential family where a constant hazard "
        "is justified.",
    ),
    _about(
        "wald-small-sample",
        "Wald bound from few failures",
        "Wald bounds are too narrow with few failures: they hold less often than they say. Choose the automatic "
        "or the calibrated bound.",
    ),
    _about(
        "likelihood-small-sample",
        "Likelihood ratio bound from few failures",
        "With few failures an uncalibrated likelihood ratio bound holds somewhat less often than it says. The "
        "calibrated bound corrects just that.",
    ),
    _about(
        "bound-unavailable",
        "Bound not available",
        "The kind of bound chosen does not exist for these units and this family; the caution says why. Choose "
        "the automatic bound, which takes one that does.",
    ),
    _about(
        "not-calibrated",
        "Bound not calibrated",
        "Neither an exact nor a calibrated bound can be given here, so the likelihood ratio bound stands in. With few "
        "failures it holds somewhat less often than it says; the caution says why nothing better is there.",
    ),
    _about(
        "no-reading",
        "No reading",
        "What was asked has no answer for this family or these units; the caution says why. Ask for something else, "
        "such as a B-life, or choose another family.",
    ),
    _about(
        "not-maximum-likelihood",
        "Estimate not by maximum likelihood",
        "The estimate comes from another method than the bounds do, so the two need not agree closely. Maximum "
        "likelihood uses all records alike.",
    ),
    _about(
        "basis-cannot-be-carried-out",
        "Basis cannot be carried out",
        "Method, family and bound as chosen do not go together, or the file names one this version does not "
        "have. Change what the caution names; nothing is replaced silently.",
    ),
    _about(
        "threshold-at-first-failure",
        "Threshold at the first failure",
        "The likelihood is highest with the threshold at the first failure itself, which is surely later than "
        "the true one. Such a fit has no bounds. Leave the threshold out, or wait for more failures.",
    ),
    _about(
        "several-maxima",
        "Several maxima",
        "The likelihood has more than one hill, so that quite different parameters explain the units. The "
        "highest is shown; compare with simpler families before relying on it.",
    ),
    _about(
        "better-without-threshold",
        "Better without a threshold",
        "Without a threshold the likelihood is even higher, so the units do not call for one. Choose the family "
        "without it.",
    ),
    _about(
        "negative-threshold",
        "Threshold below 0",
        "A threshold below 0 would mean that units age before they are used. It can be so after storage or "
        "running-in; otherwise it is a sign that another family suits better.",
    ),
    _about(
        "threshold-is-local",
        "Threshold from a local maximum",
        "With a threshold the likelihood grows without limit as the threshold nears the first failure, which "
        "means nothing. The fit shown is the highest maximum before that.",
    ),
    _about(
        "rows-unread",
        "Rows that cannot be read",
        "Some rows are not part of the analysis because a cell in them cannot be read. Put them right first: F8 "
        "goes from one to the next.",
    ),
    _about(
        "units-repeated",
        "Units of one name",
        "Several rows have the same name and are each counted as a unit. If they are the same unit, delete the "
        "older record; otherwise give them different names.",
    ),
    _about(
        "points-not-drawn",
        "Points not drawn",
        "Some failures have no place on the paper, because the estimate without a family has none for them. The "
        "fit counts them all the same.",
    ),
    _about(
        "mean-rests-on-tail",
        "Mean rests on the tail",
        "Much of the mean comes from lives longer than any observed, so it rests on the family alone. Read a "
        "B-life within the observed ages instead.",
    ),
    _about(
        "families-disagree",
        "Families disagree",
        "Another family fits these units as well or better and gives another reading. Until more failures "
        "decide, rely on the less favourable of the two.",
    ),
    _about(
        "repeated-looks",
        "Repeated looks",
        "A requirement that is looked at again after each failure, until it is met, is met by chance more often "
        "than the confidence says. Fix beforehand when you will look.",
    ),
    _about(
        "promise-not-kept",
        "Bound holds less often than it says",
        "In simulated tests like this one the bound held less often than its confidence says. Choose the "
        "calibrated bound, or read the number with that much less confidence; more failures help.",
    ),
    _about(
        "promise-exceeded",
        "Bound holds more often than it says",
        "In simulated tests like this one the bound held more often than its confidence says. It errs on the "
        "careful side and lies further out than need be.",
    ),
    _about(
        "responsible-engineer",
        "Responsible engineer",
        "The numbers are computed with care and shown with their basis. Whether they may decide something that "
        "can hurt people is for the responsible, qualified engineer and the local codes.",
    ),
)
