"""pipeflex: how much a pipe run grows, what takes it, and a calculation that a checker can follow.

Sizing aid for a qualified engineer. The governing code edition, the owner's specification, local law and
licensed practice prevail.
"""

from importlib import import_module
from typing import Any

_HOME = {
    "data.materials": ("material", "offered"),
    "data.pipes": ("dimensions", "elbow", "pipe"),
    "codes": ("code", "codes"),
    "model.pipe": ("Material", "Pipe"),
    "model.layout": ("Corner", "End", "Layout", "Point", "Segment", "Support", "Weight"),
    "model.duty": ("Case", "Confirmed", "Duty", "Limits", "PipingCode", "Title"),
    "model.design": ("Design",),
    "model.outcome": ("Outcome",),
    "methods": ("METHODS", "fit", "ladder", "reserve", "sift", "solve", "vary"),
    "files.design_file": ("load", "opened", "save"),
    "files.route": ("coordinates", "route"),
    "sheet": ("Sheet", "reopen", "sheet"),
    "errors": ("InputError", "MissingInput", "PipeflexError", "ScopeError", "TableError", "UnitError",
               "UnstableLayoutError"),
}  # fmt: skip
_MODULE_OF = {name: module for module, names in _HOME.items() for name in names}

__version__ = "0.1.0"
__all__ = sorted(_MODULE_OF)


def __getattr__(name: str) -> Any:
    """Load what is asked for when it is asked for, so that `import pipeflex` stays light."""
    if name not in _MODULE_OF:
        raise AttributeError(f"module 'pipeflex' has no attribute {name!r}")
    return getattr(import_module(f"pipeflex.{_MODULE_OF[name]}"), name)


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
