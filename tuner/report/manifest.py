"""From which inputs, by which versions, and in which time did a run come about?"""

from __future__ import annotations

import hashlib
import json
import platform
from collections.abc import Mapping
from importlib import metadata
from typing import Any

from tuner import __version__
from tuner.search.result import DesignResult

PACKAGES = ("numpy", "scipy", "pandas", "rdkit", "pymoo", "jinja2", "xlsxwriter")
"""Libraries whose version may change a result or a file."""


def manifest(result: DesignResult, files: Mapping[str, bytes], command: str) -> bytes:
    """The manifest as JSON. Timings stand here and nowhere else; all other entries are the same for the
    same inputs.
    """
    content: dict[str, Any] = {
        "title": result.brief.title,
        "command": command,
        "seed": result.seed,
        "versions": {
            "tuner": __version__,
            "library_data": result.library_version,
            "python": platform.python_version(),
            **{name: _version(name) for name in PACKAGES},
        },
        "inputs": [{"name": i.name, "role": i.role, "sha256": i.sha256} for i in result.inputs],
        "search": {
            "method": result.method,
            "reason": result.method_reason,
            "certificate": result.certificate,
            "resolution_pka": result.brief.search.resolution_pka,
        },
        "spaces": [
            {
                "core": space.core,
                "positions": dict(space.positions),
                "patterns": space.patterns,
                "analogs": space.analogs,
                "makeable": space.makeable if space.makeable >= 0 else None,
            }
            for space in result.spaces
        ],
        "counts": dict(result.counts),
        "candidates": len(result.candidates),
        "notes": list(result.notes),
        "files": {name: hashlib.sha256(data).hexdigest() for name, data in sorted(files.items())},
        "timings_s": {stage: round(seconds, 3) for stage, seconds in result.timings_s},
    }
    return (json.dumps(content, indent=2, ensure_ascii=False) + "\n").encode("utf-8")


def _version(package: str) -> str:
    """Installed version of a package."""
    try:
        return metadata.version(package)
    except metadata.PackageNotFoundError:
        return "absent"
