"""What the terms on screen mean, in a few plain sentences each: the texts behind F1 and the list of terms."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Term:
    """One term: the key it is asked for by, the title it is listed under, its text, and other words it is found by."""

    key: str
    title: str
    text: str
    also: str = ""

    def holds(self, wanted: str) -> bool:
        """Whether all words of `wanted` occur in the term, in any order, without regard to case."""
        within = f"{self.title} {self.also} {self.text}".casefold()
        return all(word in within for word in wanted.casefold().split())


RECORDS = (
    Term(
        "unit",
        "Unit",
        "One thing on test or in service: a row of the table of units. A row with a quantity stands for several "
        "units with the same record. Units of one name in two rows count as two.",
        "row specimen part",
    ),
    Term(
        "life",
        "Life",
        "The age at which a unit failed, in the unit of the lives (hours, cycles, kilometres). For a running "
        "unit it is the age reached so far, for one found failed the last age at which it was known to run.",
        "age hours cycles",
    ),
    Term(
        "failed",
        "Failed",
        "The unit failed, and its age at that moment is known. Such a record says most about the lives of the others.",
        "state failure exact",
    ),
    Term(
        "running",
        "Running (right-censored)",
        "The unit has reached this age without failing, or was taken off at it for a reason that has nothing to "
        "do with its coming failure. Its life is longer than the age shown. Leaving running units out, or "
        "counting them as failures, makes lives look shorter than they are.",
        "state censored suspended survivor removed",
    ),
    Term(
        "found failed",
        "Found failed (interval-censored)",
        "The failure was found at an inspection: it happened somewhere between Life, when the unit was last "
        "known to run, and Until, when it was found failed. Life 0 means that nobody looked before. The fit uses "
        "the whole interval and guesses no point in it.",
        "state interval left censored inspection until",
    ),
    Term(
        "entered",
        "Entered (late entry)",
        "The age at which a unit came under observation, where that was not from new: had it failed earlier, it "
        "would not be in the table at all. The fit counts it only from there on. An empty cell means from new.",
        "left truncation delayed entry",
    ),
    Term(
        "quantity",
        "Quantity",
        "How many units a row stands for; an empty cell means 1. It is only for units whose record is the same "
        "in every column.",
        "qty count",
    ),
    Term(
        "unread",
        "Unread row",
        "A row with a cell that cannot be read is kept as it was typed and left out of the analysis; the cell is "
        "marked and says why. F8 goes to the next one. Leaving out rows is only harmless as long as what they "
        "say has nothing to do with why they cannot be read.",
        "fault error marked",
    ),
    Term(
        "pasted table",
        "How a pasted table was read",
        "The line below the units says which column was taken for what, and how numbers, dates and states were "
        "understood. Change reads the same text in another way; Undo paste takes it back. Nothing is dropped: columns "
        "of your own are kept beside.",
        "paste strip columns decimal import",
    ),
    Term(
        "set",
        "Set",
        "Units analysed together: one design, lot or supplier. Each set has its own basis, colour and mark. "
        "Units that fail in different ways or ran under different conditions belong in sets of their own.",
        "group sample",
    ),
)

READINGS = (
    Term(
        "b-life",
        "B-life",
        "The age by which the given percent of units are expected to have failed: by the B10 life 10 % have "
        "failed and 90 % still run. It is the quantile of the distribution of lives. Small percents answer for "
        "early failures, which decide most requirements.",
        "b10 b1 b50 quantile percentile median life",
    ),
    Term(
        "reliability",
        "Reliability",
        "The share of units expected to run longer than a given age, written R(t). At the B10 life it is 0.90. "
        "What is missing to 1 is the failure probability F(t).",
        "survival failure probability R F",
    ),
    Term(
        "conditional reliability",
        "Reliability given an age reached",
        "The share of units expected to run on to a later age among those that already run at an earlier one: "
        "R(later) / R(earlier). With wear-out it is lower than for new units over the same stretch, with early "
        "failures higher.",
        "conditional mission",
    ),
    Term(
        "hazard",
        "Hazard rate",
        "Of the units that still run at an age, the share that fails per unit of life just then. It rises with "
        "wear-out, stays level where age does not matter, and falls where weak units fail early. It is not a "
        "probability and may exceed 1.",
        "failure rate wear-out early failures bathtub",
    ),
    Term(
        "cumulative hazard",
        "Cumulative hazard",
        "The hazard rate summed up over age, H(t). It and the reliability say the same: R = exp(-H). Where it is "
        "0.1, about 10 % have failed; beyond some 0.2 it runs ahead of the failure probability.",
        "Nelson Aalen",
    ),
    Term(
        "density",
        "Density",
        "How thickly the lives lie around an age: the area under the curve between two ages is the share of "
        "units that fail between them. Its peak is the mode, the age around which most units fail.",
        "probability density mode histogram",
    ),
    Term(
        "mean life",
        "Mean life",
        "The average life of all units if each were run to failure. It rests on the longest lives, which are "
        "seldom observed, and says nothing of early failures: by the mean life more than half of the units have "
        "often failed. A B-life says more.",
        "average MTTF",
    ),
    Term(
        "mean residual life",
        "Mean residual life",
        "The average life that units of a given age still have before them, if each is run to failure. Like the "
        "mean life it rests on the upper tail of the distribution, beyond what was observed.",
        "remaining useful life",
    ),
    Term(
        "reading line",
        "Reading line",
        "The line on a page at which the main reading is taken. Drag it, or type a percent or an age; the "
        "bracket is the confidence bound there. Alt with the arrow keys goes to the next usual percent, Shift "
        "with them by a little.",
        "bracket drag",
    ),
)

PAGES = (
    Term(
        "probability paper",
        "Probability paper",
        "Axes on which the chosen family is a straight line: age across, percent failed upwards, both spaced to "
        "suit. Points that bend away from the line say that the family does not suit. The points are drawn for "
        "the eye; the line comes from the fit.",
        "plot paper",
    ),
    Term(
        "plotting position",
        "Plotting position",
        "The percent at which a failure is drawn on the paper: middle of the step that the estimate without a "
        "family takes there, or the median rank. Running units have no point of their own; they move the later "
        "failures up.",
        "median rank adjusted rank points",
    ),
    Term(
        "kaplan-meier",
        "Kaplan-Meier steps",
        "The share still running, estimated without any family: it steps down at each failure by the share of "
        "those running just before. With inspections or late entry the steps come from Turnbull's estimate. They "
        "say nothing beyond the last age observed.",
        "Turnbull nonparametric survival steps",
    ),
    Term(
        "age scale",
        "Log or linear age",
        "The spacing of the age axis. On a log scale equal factors take equal room, which shows early failures "
        "clearly; on a linear one equal differences do. It changes the picture only, never a number. The menu of "
        "a chart switches it.",
        "axis logarithmic",
    ),
    Term(
        "visits",
        "Visits",
        "Dated records of the units and readings of a session, kept so that what failed since can be held "
        "against what the earlier fit had foretold.",
        "history record",
    ),
    Term(
        "requirement",
        "Requirement",
        "A life with a percent and a confidence that is to be shown, such as a B10 life of at least 1000 h with "
        "90 % confidence. It is met when the lower bound reaches it, not when the estimate does.",
        "target promise demonstration",
    ),
    Term(
        "caution",
        "Caution",
        "Something a reader must know before relying on a number. It stands beside the number it is about and "
        "goes into every copy. ‼ marks the serious ones, ! those to weigh, a dot those to note.",
        "warning note",
    ),
)
