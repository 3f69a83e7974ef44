"""What users of the library rely on: names, and what loading them costs."""

from __future__ import annotations

import subprocess
import sys
import time

import ident

PUBLIC = {
    "Contrast",
    "IdentError",
    "Identification",
    "Recheck",
    "ScaleCalibration",
    "Settings",
    "Spectrum",
    "__version__",
    "calibrate_scale",
    "candidates_at",
    "contrast",
    "element_card",
    "identify",
    "identify_together",
    "load_scale",
    "read_spectra",
    "read_labels",
    "read_spectrum",
    "recheck",
    "save_scale",
}
HEAVY = ("numpy", "scipy", "pandas", "mendeleev", "matplotlib", "xraylib", "xraydb")


def test_public_names_are_pinned() -> None:
    assert set(ident.__all__) == PUBLIC
    for name in PUBLIC:
        assert getattr(ident, name) is not None


def test_identify_is_the_function_whatever_was_imported_before() -> None:
    from ident import identify
    from ident.identification import identify as same

    assert identify is same
    assert callable(ident.identify)


def run_python(code: str) -> str:
    return subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout


def test_the_package_alone_loads_nothing_heavy() -> None:
    loaded = run_python("import sys, ident; print(*sys.modules)").split()
    assert not set(HEAVY) & set(loaded)


def test_a_lookup_loads_nothing_heavy() -> None:
    code = (
        "import sys\nfrom ident.cli import main\n"
        "try:\n    main(['at', '651'])\nexcept SystemExit as end:\n    assert end.code == 0, end.code\n"
        "print('MODULES', *sys.modules)"
    )
    shown, _, loaded = run_python(code).partition("MODULES")
    assert "Fe" in shown  # iron has its L3M23V line there: handbook practice, from memory
    assert not set(HEAVY) & set(loaded.split())


def seconds(*words: str) -> float:
    start = time.perf_counter()
    subprocess.run([sys.executable, *words], check=True, capture_output=True)
    return time.perf_counter() - start


def test_a_lookup_costs_little_more_than_starting_numpy() -> None:
    """At most 2.5 times `import numpy`, whole process; measured side by side, the best of five each."""
    pairs = [(seconds("-m", "ident", "at", "651"), seconds("-c", "import numpy")) for _ in range(5)]
    assert min(lookup for lookup, _ in pairs) <= 2.5 * min(numpy for _, numpy in pairs)
