"""The ``.si`` form of a formula: its own signature, range checks inline, no loop over arguments.

A loop over arguments costs as much as the formula. The function is written out once, at import,
from the declaration (as data-class generators do), so that it costs no more than one by hand.
"""

from __future__ import annotations

import linecache
import math
from collections.abc import Callable
from typing import Any

from wellindex.units.checks import AT_ONCE
from wellindex.units.declaration import Parameter
from wellindex.units.evaluate import Careful


def _condition(parameter: Parameter) -> str | None:
    name = parameter.name
    if parameter.reader is not None:
        low, high = parameter.reader.low, parameter.reader.high
        test = f"{name}.__class__ is float and {low!r} < {name} < {high!r}"
    elif parameter.choices:
        test = f"{name} in {parameter.choices!r}"
    else:
        return None
    return f"({name} is None or {test})" if parameter.optional else f"({test})"


def compile_si(careful: Careful) -> Callable[..., Any]:
    """Write and compile the SI form of a formula; what is not plain goes the careful way."""
    body, declaration = careful.body, careful.declaration
    names = list(declaration.parameters)
    conditions = [c for c in map(_condition, declaration.parameters.values()) if c]
    arguments = [
        f"{name}=_defaults[{name!r}]" if name in declaration.defaults else name for name in names
    ]
    passed = ", ".join(f"{name}={name}" for name in names)
    source = (
        f"def si(*, {', '.join(arguments)}):\n"
        f"    if {' and '.join(conditions) or 'True'}:\n"
        f"        return _body(_check, {passed})\n"
        f"    return _general(dict({passed}))\n"
    )
    filename = f"<wellindex si {declaration.name}>"
    linecache.cache[filename] = (len(source), None, source.splitlines(keepends=True), filename)

    namespace: dict[str, Any] = {
        "__name__": __name__,
        "_body": body,
        "_check": AT_ONCE,
        "_defaults": declaration.defaults,
        "_general": careful.si,
        "inf": math.inf,
    }
    exec(compile(source, filename, "exec"), namespace)
    si: Callable[..., Any] = namespace["si"]
    si.__module__ = body.__module__
    si.__qualname__ = f"{declaration.name}.si"
    si.__doc__ = f"`{declaration.name}` on SI floats or arrays; see there."
    return si
