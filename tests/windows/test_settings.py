"""What is remembered comes back in the next start as what it was, and what cannot be read as the usual."""

from PySide6.QtCore import QSettings

from reliability_app.session.number_style import NumberStyle, choose_number_style, number_style
from reliability_app.windows.settings import WindowSettings


def settings_of(path):
    return WindowSettings(QSettings(str(path), QSettings.Format.IniFormat))


def test_preferences_survive_a_restart(tmp_path):
    path = tmp_path / "window.ini"
    store = QSettings(str(path), QSettings.Format.IniFormat)
    settings = WindowSettings(store)
    settings.number_style = NumberStyle(4, "comma")
    settings.confidence, settings.side = 0.9, "two"
    settings.text_step, settings.first_age_scale = 3, "linear"
    settings.hidden_columns = frozenset({"until", "Lot, of 2;"})
    store.sync()
    again = settings_of(path)
    assert again.number_style == NumberStyle(4, "comma")
    assert (again.confidence, again.side, again.text_step, again.first_age_scale) == (0.9, "two", 3, "linear")
    assert again.hidden_columns == {"until", "Lot, of 2;"}
    basis = again.new_session().sets[0].basis
    assert (basis.confidence, basis.side, basis.family) == (0.9, "two", "lognormal")


def test_what_cannot_be_read_is_as_usual(tmp_path):
    path = tmp_path / "window.ini"
    path.write_text(
        "[preferences]\ndigits=many\nthousands=dots\nconfidence=95\nside=left\ntext_step=900\nage_scale=cubic\n",
        encoding="utf-8",
    )
    settings = settings_of(path)
    try:
        choose_number_style(settings.number_style)
        assert (number_style().digits, number_style().mark) == (3, "\u202f")
    finally:
        choose_number_style(NumberStyle())
    assert (settings.confidence, settings.side, settings.text_step) == (0.95, "lower", 12)
    assert settings.first_age_scale is None
    assert settings.hidden_columns == frozenset()


def test_nothing_stored_is_the_usual(tmp_path):
    settings = settings_of(tmp_path / "none.ini")
    assert settings.number_style == NumberStyle()
    assert (settings.confidence, settings.side, settings.text_step, settings.first_age_scale) == (
        0.95,
        "lower",
        0,
        None,
    )
