"""What the terms of fitting and of confidence bounds mean: families, fit methods, kinds of bound."""

from __future__ import annotations

from reliability_app.windows.help_texts import Term

BOUNDS = (
    Term(
        "confidence",
        "Confidence",
        "How often a bound found in this way holds, if such tests were repeated many times: a 95 % lower bound "
        "lies below the true value in 95 of 100 tests. It does not say that this one bound is right with 95 % "
        "probability, and it says nothing of the share of units, which is the B-life's percent.",
        "level coverage percent",
    ),
    Term(
        "one-sided bound",
        "One-sided bound",
        "A lower bound answers “at least how long?”, an upper one “at most how long?”, with the whole chance of "
        "being wrong on that one side. Requirements usually ask for a lower bound of a life. A 95 % one-sided "
        "lower bound is the same as the lower end of a 90 % two-sided interval.",
        "lower upper side",
    ),
    Term(
        "two-sided bound",
        "Both bounds (two-sided interval)",
        "A lower and an upper end that hold the true value between them with the confidence stated; the chance "
        "of being wrong is shared out between the two sides. Its lower end lies further out than the one-sided "
        "bound of the same confidence: do not quote one for the other.",
        "interval two side",
    ),
    Term(
        "likelihood bound",
        "Likelihood ratio bound",
        "It reaches as far as values can be moved before the data fit noticeably worse than at the best fit, "
        "judged by the chi-square distribution. It never leaves the possible range and does not depend on how "
        "the parameters are written. With few failures it holds somewhat less often than it says.",
        "profile likelihood ratio LR",
    ),
    Term(
        "wald bound",
        "Wald bound",
        "Estimate plus or minus a number of standard errors, formed here on a suitable scale (the logarithm, for "
        "a life). It is quick, and good with many failures. With fewer than about 50 a lower bound of an early "
        "B-life comes out too high.",
        "normal approximation Fisher delta method standard error",
    ),
    Term(
        "exact bound",
        "Exact bound",
        "A bound that holds exactly as often as it says, at any number of units. There is one only for some "
        "families and test plans, mainly where all units failed or the test stopped at a set number of failures. "
        "Where there is none the program says so.",
        "chi-square noncentral t pivotal conditional",
    ),
    Term(
        "calibrated bound",
        "Calibrated likelihood ratio bound",
        "A likelihood ratio bound whose cut-off is found by simulating tests like this one instead of being "
        "taken from the chi-square distribution, so that it holds closely as often as it says even with few "
        "failures. It takes seconds; until it is there the uncalibrated one stands, marked as provisional.",
        "simulation bootstrap",
    ),
    Term(
        "automatic bound",
        "Automatic bound",
        "The program takes the exact bound where there is one for these units and this family, otherwise the "
        "calibrated one, and the likelihood ratio bound where neither can be given. The line under the reading "
        "says which it was.",
        "default",
    ),
    Term(
        "provisional",
        "Provisional bound",
        "A quick bound that stands in until the slow one has been computed. It is marked as such in the reading, "
        "and with few failures it is somewhat too favourable.",
        "progress calibrating",
    ),
    Term(
        "band",
        "Confidence band",
        "The bounds of all points of a curve, drawn as a band. Each point is taken by itself: that the whole "
        "true curve lies in the band is less likely than the confidence says.",
        "pointwise",
    ),
    Term(
        "simulated plan",
        "Simulated plan",
        "Tests like this one are drawn by simulation from the fit and analysed again, to see how often each kind "
        "of bound would have held. It shows what a bound is worth under just this plan of units, ages and "
        "removals.",
        "coverage simulate",
    ),
)

FITTING = (
    Term(
        "basis",
        "Basis",
        "Everything a number rests on besides the units: family, fit method, kind of bound, confidence and side. "
        "Two numbers can only be compared when their bases are the same, so it is copied along with every "
        "reading.",
    ),
    Term(
        "family",
        "Family",
        "The kind of distribution the lives are taken to follow. Within the observed ages most families agree; "
        "at small percents, below the first failure, they do not. Choose it by what is known of how the units "
        "fail, and compare it with others on the page of candidates.",
        "distribution model",
    ),
    Term(
        "lognormal",
        "Lognormal",
        "The logarithms of the lives are normally distributed, with mean mu and spread sigma. It suits damage "
        "that grows in proportion to what is there already, as fatigue cracks do. Its hazard rate rises first "
        "and falls again late.",
        "family normal log",
    ),
    Term(
        "weibull",
        "Weibull",
        "The family of the weakest link, with a shape beta and a scale eta, the age by which 63.2 % have failed. "
        "Shape above 1 means wear-out, 1 a constant hazard rate, below 1 early failures. Held shapes are for "
        "units too few to estimate it.",
        "family shape scale characteristic life beta eta",
    ),
    Term(
        "exponential",
        "Exponential",
        "The family with a constant hazard rate: a used unit is as good as a new one. It has one parameter, the "
        "mean life. Wear-out cannot be seen with it, so it is for units that fail by chance from outside.",
        "family constant hazard",
    ),
    Term(
        "threshold",
        "Threshold",
        "An age below which no unit can fail, estimated along with the other parameters. It needs many failures "
        "and a physical reason; estimated too high it promises an age free of failures that does not exist.",
        "location failure-free three-parameter",
    ),
    Term(
        "held shape",
        "Shape held",
        "The Weibull shape is given instead of estimated, from earlier tests of the same kind of failure. All "
        "readings then rest on that value: the bound allows for no error in it, so try a smaller and a greater "
        "one too.",
        "fixed beta",
    ),
    Term(
        "maximum likelihood",
        "Maximum likelihood",
        "The fit method that takes those parameters under which the observed records, running units and all, "
        "were most likely. It is the usual one here: all kinds of records are used, and bounds come from the "
        "same likelihood.",
        "fit method MLE estimate",
    ),
    Term(
        "fit method",
        "Other fit methods",
        "Corrected maximum likelihood takes out the known lean of an estimate from few failures; median-rank "
        "regression draws a straight line through the points on the paper. Regression treats points as "
        "independent and makes poor use of running units; prefer maximum likelihood.",
        "rank regression least squares unbiased corrected",
    ),
    Term(
        "log-likelihood",
        "Log-likelihood",
        "The logarithm of how likely the observed records are under the fit. Only differences mean something, "
        "between fits to the same units: higher is a closer fit. A family with more parameters is always helped "
        "by them, which AICc allows for.",
    ),
    Term(
        "likelihood region",
        "Likelihood region",
        "All pairs of parameter values that fit the units nearly as well as the best pair, with the best one "
        "marked. A narrow slanting region says that some combinations are known better than each parameter "
        "alone. Regions of two sets that lie well apart show that the sets differ.",
        "contour joint",
    ),
    Term(
        "aicc",
        "AICc",
        "A score to compare families fitted to the same units: minus twice the log-likelihood, plus a fine for "
        "each parameter that is harder in small samples. Lower is better. A difference below about 2 decides "
        "nothing.",
        "Akaike information criterion candidates",
    ),
    Term(
        "goodness of fit",
        "Goodness of fit",
        "How far the observed failures lie from the fitted curve, as an Anderson-Darling distance with a p-value "
        "from simulation. A p-value below 0.05 is a reason to doubt the family. A large one does not prove it: "
        "few failures can hardly contradict any.",
        "Anderson Darling p-value",
    ),
    Term(
        "residuals",
        "Residuals",
        "The records put on the scale of the fitted distribution. If the family is right they look like a sample "
        "of its standard form and follow the straight line. A bend at the low end matters most, since small "
        "percents are read there.",
    ),
    Term(
        "candidates",
        "Candidates",
        "Families fitted side by side to the same units, with their scores and what each says about the same "
        "B-life. Where several cannot be told apart, the spread of their readings is part of what is not known.",
        "compare families",
    ),
)
