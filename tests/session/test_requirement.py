"""A requirement held against a fit: met, not met or not to be told, and what repeated looks do."""

import numpy as np
import pytest

from reliability_app.engine import LifeData, fit
from reliability_app.engine.errors import DataError
from reliability_app.session.document import LifeAsk, ReliabilityAsk
from reliability_app.session.requirement import Requirement, Verdict, adjusted_confidence, judge

# Invented.
LIVES = np.array([412.0, 533, 610, 689, 741, 802, 870, 951, 1033, 1160])


def fitted():
    return fit(LifeData.right_censored(LIVES, np.ones(10, dtype=bool)), "lognormal")


@pytest.mark.parametrize(
    ("at_least", "verdict"), [(150.0, Verdict.MET), (430.0, Verdict.CANNOT_BE_TOLD), (900.0, Verdict.NOT_MET)]
)
def test_the_lower_bound_meets_and_the_upper_bound_refuses(at_least, verdict):
    found = fitted()
    judged = judge(found, Requirement(LifeAsk(10.0), at_least, 0.95), kind="exact", look=1)
    assert judged.verdict is verdict
    assert judged.lower == found.life_bounds(0.1, side="lower", kind="exact")[0]
    assert judged.upper == found.life_bounds(0.1, side="upper", kind="exact")[1]
    assert judged.cautions == ()


def test_the_sentence_says_what_was_required_and_the_bound_that_decides():
    judged = judge(fitted(), Requirement(LifeAsk(10.0), 150.0, 0.95), kind="exact", look=1)
    assert judged.sentence("h").startswith(
        "B10 life at least 150 h, with 95 % confidence: met. With 95 % confidence it"
    )
    judged = judge(fitted(), Requirement(ReliabilityAsk(900.0), 0.9, 0.9), kind="exact", look=1)
    assert judged.sentence("h").startswith("Reliability at 900 h at least 0.9, with 90 % confidence: not met.")


def test_all_looks_together_err_no_more_than_once():
    errors = [1.0 - adjusted_confidence(0.95, look) for look in range(1, 200)]
    assert errors[0] == pytest.approx(0.025)
    assert errors[1] == pytest.approx(0.05 / 6)
    assert sum(errors) < 0.05


def test_a_later_look_is_cautioned_and_the_adjusted_one_asks_for_more():
    requirement = Requirement(LifeAsk(10.0), 280.0, 0.95)
    plain = judge(fitted(), requirement, kind="exact", look=4)
    assert [caution.code for caution in plain.cautions] == ["repeated-looks"]
    assert "20 %" in plain.cautions[0].text
    adjusted = judge(fitted(), requirement, kind="exact", look=4, adjusted=True)
    assert adjusted.cautions == ()
    assert adjusted.lower < plain.lower
    assert adjusted.confidence == pytest.approx(1 - 0.05 / 20)


@pytest.mark.parametrize(
    ("ask", "at_least", "confidence"),
    [(LifeAsk(10.0), 0.0, 0.95), (ReliabilityAsk(5.0), 1.0, 0.95), (LifeAsk(10.0), 100.0, 1.0)],
)
def test_what_cannot_be_required_is_refused(ask, at_least, confidence):
    with pytest.raises(DataError):
        Requirement(ask, at_least, confidence)
