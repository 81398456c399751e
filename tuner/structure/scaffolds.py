"""Which cores can a molecule be seen as, and what does every phenol or aniline fall back on?

`SCAFFOLD_CORES` are the two lone benzene rings with everything open; a molecule whose reporting ring no
larger core fits is seen as one of them. `index_cores` prepares a library of cores once for all molecules.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from tuner.library.records import Core
from tuner.structure.cores import CoreForm, form_of
from tuner.structure.records import PreparedCore

_RING = "c([*:2])c([*:3])c([*:4])c([*:5])c1[*:6]"

SCAFFOLD_CORES: Mapping[str, Core] = {
    "phenol": Core("phenol", "phenol", f"Oc1{_RING}", "phenol"),
    "aniline": Core("aniline", "aniline", f"[*:7]N([*:8])c1{_RING}", "anilinium", labels={7: "N", 8: "N'"}),
}
"""The fall-back cores; slots 2 to 6 and, on the amine, N and N'."""


@dataclass(frozen=True)
class CoreIndex:
    """Cores made ready for matching.

    `prepared` holds the library's cores in the library's order; `scaffold(name)` the fall-back "phenol" or
    "aniline" with all positions open, which a `SiteView` with that core name refers to.
    """

    prepared: Mapping[str, PreparedCore]
    forms: tuple[CoreForm, ...]  # largest first, then the library's order; fall-backs last

    def scaffold(self, name: str) -> PreparedCore:
        """The fall-back core "phenol" (2 to 6) or "aniline" (2 to 6, N, N')."""
        return form_of(SCAFFOLD_CORES[name]).prepared

    def core(self, name: str) -> PreparedCore:
        """The core that a `SiteView` names; the fall-backs come before a library core of the same name."""
        return self.scaffold(name) if name in SCAFFOLD_CORES else self.prepared[name]


def index_cores(cores: Mapping[str, Core]) -> CoreIndex:
    """Prepare all cores of a library for `dissect`; the result can be kept as long as the library.

    Raises
    ------
    StructureError
        From the first core that cannot be prepared; the text names it.

    >>> index_cores({}).core("aniline").open_labels
    ('2', '3', '4', '5', '6', 'N', "N'")
    """
    forms = [form_of(core) for core in cores.values()]
    own = [f for f in forms if f.core.name not in SCAFFOLD_CORES]
    own.sort(key=lambda f: -f.bare.GetNumAtoms())  # stable: the library's order breaks ties
    fallback = [form_of(core) for core in SCAFFOLD_CORES.values()]
    return CoreIndex(prepared={f.core.name: f.prepared for f in forms}, forms=(*own, *fallback))
