"""The bench sheet whole: which tables there are, and its JSON Schema for editors.

``python -m plumbfall.bench.schema`` writes ``bench.schema.json`` anew beside this file.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Annotated, Any

from pydantic import Field

from plumbfall.bench import choice_keys, equipment_keys, paper_keys, run_keys
from plumbfall.bench.common_keys import EMPTY, Keys, doc
from plumbfall.bench.quantity_fields import QUANTITY_SHAPE
from plumbfall.quantities import DIMENSIONS

__all__ = ["SCHEMA_FILE", "Sheet", "json_schema", "schema_text", "write_schema"]

SCHEMA_FILE = Path(__file__).with_name("bench.schema.json")


class Sheet(Keys):
    """A bench sheet. Tables written [kind.NAME] hold as many entries as needed."""

    bench: Annotated[paper_keys.BenchKeys, doc("general choices")] = paper_keys.BenchKeys()
    laboratory: Annotated[paper_keys.LaboratoryKeys, doc("who measures")] = (
        paper_keys.LaboratoryKeys()
    )
    report: Annotated[paper_keys.ReportKeys, doc("head of the report")] = paper_keys.ReportKeys()
    sample: Annotated[paper_keys.SampleKeys, doc("the sample")] = paper_keys.SampleKeys()
    site: Annotated[paper_keys.SiteKeys, doc("where gravity acts")] = paper_keys.SiteKeys()
    timer: Annotated[dict[str, equipment_keys.TimerKeys], doc("clocks"), EMPTY]
    thermometer: Annotated[dict[str, equipment_keys.ThermometerKeys], doc("thermometers"), EMPTY]
    gauge: Annotated[dict[str, equipment_keys.GaugeKeys], doc("diameter gauges"), EMPTY]
    balance: Annotated[dict[str, equipment_keys.BalanceKeys], doc("balances"), EMPTY]
    tube: Annotated[dict[str, equipment_keys.TubeKeys], doc("fall tubes"), EMPTY]
    material: Annotated[dict[str, equipment_keys.MaterialKeys], doc("materials of balls"), EMPTY]
    ball: Annotated[dict[str, equipment_keys.BallKeys], doc("balls and lots of balls"), EMPTY]
    liquid: Annotated[dict[str, run_keys.LiquidKeys], doc("liquids"), EMPTY]
    set: Annotated[dict[str, run_keys.SetKeys], doc("run sets"), EMPTY]
    scatter: Annotated[run_keys.ScatterKeys | None, doc("known repeatability")] = None
    reference: Annotated[dict[str, run_keys.ReferenceKeys], doc("certified liquids"), EMPTY]
    constant: Annotated[dict[str, run_keys.ConstantKeys], doc("tube constants"), EMPTY]
    timings: Annotated[
        choice_keys.TimingsKeys,
        doc("reading of timing files"),
        Field(default_factory=lambda: choice_keys.TimingsKeys.model_validate({})),
    ]
    methods: Annotated[choice_keys.MethodKeys, doc("laws chosen")] = choice_keys.MethodKeys()
    limits: Annotated[
        dict[str, float | bool], choice_keys.limits, doc("limits that findings use"), EMPTY
    ]


def json_schema() -> dict[str, Any]:
    """Return the JSON Schema (2020-12) of a bench sheet."""
    schema = _for_editors(Sheet.model_json_schema())
    schema["$defs"]["quantity"] = QUANTITY_SHAPE
    head = {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "plumbfall bench sheet",
    }
    return {**head, **{key: value for key, value in schema.items() if key != "title"}}


def _for_editors(node: Any) -> Any:
    """Return a schema without what TOML has no use for: null, and titles made from keys."""
    if isinstance(node, list):
        return [_for_editors(item) for item in node if item != {"type": "null"}]
    if not isinstance(node, dict):
        return node
    kept = {
        key: _for_editors(value)
        for key, value in node.items()
        if not (key == "title" and isinstance(value, str))
        and not (key == "default" and value in (None, "", [], {}))
    }
    if "x-quantity" in kept:
        called = DIMENSIONS[kept.pop("x-quantity")].called
        kept["description"] = f"{kept.get('description', called)} ({called})"
        kept["$ref"] = "#/$defs/quantity"
    if len(kept.get("anyOf", ())) == 1:
        kept |= kept.pop("anyOf")[0]
    return kept


def write_schema(file: Path = SCHEMA_FILE) -> None:
    """Write the JSON Schema to a file."""
    file.write_text(schema_text(), encoding="utf-8")


def schema_text() -> str:
    """Return the JSON Schema as the text of its file."""
    return json.dumps(json_schema(), indent=1, ensure_ascii=False) + "\n"


if __name__ == "__main__":
    write_schema()
