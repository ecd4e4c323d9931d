"""How long a bed of sediment or reactive mix holds back the metals of mine water, and why.

From Python: `load_case`, `run`, `open_result`, `assay`, `equilibrate` and `certify`; each is imported when
first used.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"

_HOMES = {
    "load_case": ("gossan.case.read", "read_case"),
    "run": ("gossan.recording", "run"),
    "open_result": ("gossan.store.read", "open_result"),
    "assay": ("gossan.views.assay", "assay"),
    "equilibrate": ("gossan.views.batch", "equilibrate"),
    "certify": ("gossan.chemistry.certificate", "certify"),
}
__all__ = ["__version__", "assay", "certify", "equilibrate", "load_case", "open_result", "run"]

if TYPE_CHECKING:
    from gossan.case.read import read_case as load_case
    from gossan.chemistry.certificate import certify
    from gossan.recording import run
    from gossan.store.read import open_result
    from gossan.views.assay import assay
    from gossan.views.batch import equilibrate


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'gossan' has no attribute {name!r}")
    module, attribute = _HOMES[name]
    found = globals()[name] = getattr(import_module(module), attribute)
    return found


def __dir__() -> list[str]:
    return sorted([*globals(), *_HOMES])
