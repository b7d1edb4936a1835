"""The study: one frozen object whose attributes are the keys of the study file (mm, N, degrees)."""

import functools
import hashlib
import json
from typing import Any

from pydantic import BaseModel, Field

from ergo.study.fields import Section, key
from ergo.study.loads import AnyLoad, ConstantLoadSection
from ergo.study.machine import (
    AnyLinkage,
    AnyZone,
    GripSection,
    HandleLinkage,
    LeverSection,
    PathSection,
    Structure,
    TouchPoint,
)
from ergo.study.sections import BenchSection, Duty, Head, OperatorsSection, Screw, Targets


class Variant(Section):
    """`[[variants]]`: a named set of changes to a study's values."""

    name: str = key(..., "what the variant is called")
    set: dict[str, Any] = key(..., "dotted keys and their values in this variant")


class Study(Section):
    """One study file, read and checked."""

    study: Head = Field(default_factory=Head)
    bench: BenchSection = Field(default_factory=BenchSection)
    operators: OperatorsSection = Field(default_factory=OperatorsSection)
    lever: LeverSection | None = None
    grip: GripSection = Field(default_factory=GripSection)
    linkage: AnyLinkage = Field(default_factory=HandleLinkage)
    load: AnyLoad = Field(default_factory=lambda: ConstantLoadSection(kind="constant", force_n=0.0))
    path: PathSection | None = None
    zones: tuple[AnyZone, ...] = ()
    touch_points: tuple[TouchPoint, ...] = ()
    duty: Duty = Field(default_factory=Duty)
    screw: Screw | None = None
    structure: Structure | None = None
    targets: Targets = Field(default_factory=Targets)
    variants: tuple[Variant, ...] = ()
    folder: str = Field(default="", exclude=True)
    name: str = Field(default="study", exclude=True)
    variant_name: str = Field(default="", exclude=True)

    def content(self) -> dict[str, Any]:
        """Return what the file says, with every default filled in, as plain values."""
        return self.model_dump(mode="json", exclude_none=True)

    def digest(self) -> str:
        """Return a checksum of the content and of all that stands in the CSV files it refers to."""
        rows = [getattr(part, "rows", ()) for part in (self.linkage, self.load, self.path)]
        own_people = [self.operators.population_checksum] if self.operators.population_checksum else []
        text = json.dumps([self.content(), rows, *own_people], sort_keys=True)
        return hashlib.sha256(text.encode()).hexdigest()

    def with_values(self, values: dict[str, Any]) -> "Study":
        """Return the study with other values at dotted keys, checked like a file.

        Raises
        ------
        StudyError
            With all problems, among them keys that do not exist.
        """
        from ergo.study.reader import changed

        return changed(self, values)

    def variant(self, name: str) -> "Study":
        """Return the study as one of its variants makes it; KeyError for an unknown name."""
        for variant in self.variants:
            if variant.name == name:
                return self.with_values(variant.set).model_copy(update={"variant_name": name})
        raise KeyError(name)

    def as_toml(self) -> str:
        """Return the study as a study file, keys in a fixed order; it reads back as the same study."""
        import tomli_w

        content = self.content()
        if self.path is not None:
            content = {section: part for section, part in content.items() if section not in ("linkage", "load")}
        return tomli_w.dumps(content)


def schema() -> list[dict[str, Any]]:
    """Return every key of the study file, one row a key.

    Each has section, of_kind (in linkage, load and zones: the kind that has the key), path, name, kind (of value:
    choice, flag, number, whole, text, pair, point, numbers, table), also (what may stand in place of a choice),
    required, default, unit, help, low, high, least and choices.
    """
    return [dict(row) for row in _described()]


@functools.cache
def _described() -> tuple[dict[str, Any], ...]:
    found: list[dict[str, Any]] = []
    for section, field in Study.model_fields.items():
        if field.exclude:
            continue
        for model in _models(field.annotation):
            kind = _tag(model)
            for name, inner in model.model_fields.items():
                if not inner.exclude and isinstance(inner.json_schema_extra, dict):
                    found.append(_row(section, kind if section in ("linkage", "load", "zones") else "", name, inner))
    return tuple(found)


@functools.cache
def hidden() -> frozenset[tuple[str, str]]:
    """Return the (section, name) that a study keeps for itself and no file may set; at the top the section is empty."""
    found = {("", name) for name, field in Study.model_fields.items() if field.exclude}
    for section, field in Study.model_fields.items():
        for model in _models(field.annotation):
            found |= {(section, name) for name, inner in model.model_fields.items() if inner.exclude}
    return frozenset(found)


def _tag(model: type[BaseModel]) -> str:
    """Return the one word that marks a model as a kind of its section, empty where it has none."""
    for name in ("kind", "shape"):
        words = getattr(model.model_fields[name].annotation, "__args__", ()) if name in model.model_fields else ()
        if len(words) == 1:
            return str(words[0])
    return ""


def _row(section: str, kind: str, name: str, field: Any) -> dict[str, Any]:
    default = None if field.is_required() else field.default
    return {
        "section": section,
        "of_kind": kind,
        "path": f"{section}.{name}",
        "name": name,
        "kind": _kind_of(field),
        "also": _also(field),
        "required": field.is_required(),
        "default": default,
        **field.json_schema_extra,
    }


def _kind_of(field: Any) -> str:
    """Return the control that a key asks for: choice, flag, number, whole, text, pair, point, numbers, table."""
    text = str(field.annotation)
    if field.json_schema_extra["choices"] and "Literal" in text:
        return "choice"
    for mark, kind in (("bool", "flag"), ("dict", "table"), ("float, ...", "numbers"), ("float, float, float", "point"),
                       ("float, float", "pair"), ("int", "whole"), ("float", "number")):  # fmt: skip
        if mark in text:
            return kind
    return "text"


def _also(field: Any) -> str:
    """Return what may stand in place of a choice: three numbers, a number, or nothing."""
    text = str(field.annotation)
    if "Literal" not in text or "float" not in text:
        return ""
    return "three numbers" if "float, float, float" in text else "a number"


def _models(annotation: Any) -> list[type[BaseModel]]:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return [annotation]
    return [model for inner in getattr(annotation, "__args__", ()) for model in _models(inner)]
