"""The folders that ship with the program are found, and a broken installation is said to be one."""

import pytest

from reliability_app.engine.errors import RigpaperError
from reliability_app.session import shipped as shipped_module
from reliability_app.session.shipped import shipped


@pytest.mark.parametrize(("name", "holds"), [("resources", "session.schema.json"), ("sample_sets", "*.json")])
def test_the_folders_of_a_checkout_are_found(name, holds):
    assert list(shipped(name).glob(holds))


def test_inside_an_installed_package_its_own_copy_counts(tmp_path, monkeypatch):
    package = tmp_path / "site-packages" / "reliability_app"
    (package / "shipped" / "resources").mkdir(parents=True)
    (tmp_path / "site-packages" / "resources").mkdir()  # some other distribution's
    monkeypatch.setattr(shipped_module, "_PACKAGE", package)
    assert shipped("resources") == package / "shipped" / "resources"


def test_a_missing_folder_is_named_with_what_to_do(tmp_path, monkeypatch):
    monkeypatch.setattr(shipped_module, "_PACKAGE", tmp_path / "reliability_app")
    with pytest.raises(RigpaperError, match=r"resources .* is missing .* Install Rigpaper again"):
        shipped("resources")
