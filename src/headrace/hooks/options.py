"""The `[plugin.NAME]` tables of a scenario, validated by each plugin's own schema."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import msgspec
from msgspec import Struct

from headrace.errors import InputError
from headrace.names import nearest
from headrace.values.case import Case


def validate(name: str, schema: type[Struct] | None, given: Mapping[str, Any]) -> Struct | None:
    """The options of one plugin as its Struct, with its defaults. Raises InputError with the key that is wrong."""
    if schema is None:
        if given:
            raise InputError(f"plugin {name} has no options", key=f"plugin.{name}", read=dict(given))
        return None
    known = [field.encode_name for field in msgspec.structs.fields(schema)]
    for key in given:
        if key not in known:
            raise InputError(
                f"plugin {name} has no option {key!r}",
                key=f"plugin.{name}.{key}",
                read=key,
                accepted=", ".join(known),
                near=nearest(key, known),
            )
    try:
        return msgspec.convert(dict(given), schema, strict=True)
    except msgspec.ValidationError as error:
        reason, _, path = str(error).partition(" - at ")
        key = f"plugin.{name}{path.strip('`').removeprefix('$')}"
        raise InputError(f"plugin {name}: {reason[:1].lower()}{reason[1:]}", key=key, read=_at(given, path)) from error


def options(plugin: Any, case: Case) -> Any:
    """The plugin's options for a case: its own Struct, from `[plugin.NAME]` or its defaults; None without a schema."""
    return validate(plugin.name, getattr(plugin, "options", None), case.plugin_options.get(plugin.name, {}))


def _at(given: Mapping[str, Any], path: str) -> Any:
    key = path.strip("`").removeprefix("$.").split(".")[0].split("[")[0]
    return given.get(key, dict(given))
