"""The schema that ships is the one the validating definitions give, and these agree with the rest of the program."""

import dataclasses
import json

import msgspec

from reliability_app.session.document import Basis
from reliability_app.session.json_schema_types import BasisOfSet, SessionFile, UnitRow, schema_text
from reliability_app.session.shipped import shipped
from reliability_app.session.unit_table import BUILT_IN_COLUMNS


def test_the_shipped_schema_is_current():
    shipped_text = (shipped("resources") / "session.schema.json").read_text(encoding="utf-8")
    assert shipped_text == schema_text(), "Run: python -m reliability_app.session.json_schema_types"


def test_the_schema_describes_each_column_of_the_grid():
    assert UnitRow.__struct_fields__ == BUILT_IN_COLUMNS
    assert tuple(json.loads(schema_text())["$defs"]["UnitRow"]["properties"]) == BUILT_IN_COLUMNS


def test_a_basis_in_a_file_is_a_basis_in_the_program():
    names = [field.name for field in dataclasses.fields(Basis)]
    assert names == [*BasisOfSet.__struct_fields__, "kept"]
    assert Basis(**msgspec.structs.asdict(BasisOfSet())) == Basis()


def test_the_schema_leaves_room_for_unknown_keys():
    # A later program of the same version may write keys this one does not know.
    definitions = json.loads(schema_text())["$defs"]
    assert "SessionFile" in definitions
    assert not any("additionalProperties" in definition for definition in definitions.values())
    assert SessionFile.__struct_config__.forbid_unknown_fields is False
