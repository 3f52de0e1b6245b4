"""Densities against the values and ranges that handbooks print."""

import pytest

from core.material import MATERIALS, material

CALLISTER = "Callister, Materials Science and Engineering, App. B, Table B.1"
GERE = "Gere, Mechanics of Materials, 5th ed., App. H, Table H-1"
NIST = "NIST composition data as coded in Geant4"
DATABASE = "Materials Properties Database"
EN_10088 = "EN 10088-1 as tabulated by a tube maker"
PLASTICS = "handbook tables of plastics"
EUROCODE = "EN 1991-1-1 and EN 338 unit weights"
TANAKA = "Tanaka et al., Metrologia 38 (2001) 301"

# name, lowest and highest value printed, where; kg/m³
PRINTED = [
    ("steel", 7850, 7872, f"{GERE}; {DATABASE} (1006)"),
    ("steel, S235", 7850, 7872, f"{CALLISTER} (A36)"),
    ("steel, C45", 7850, 7872, f"{CALLISTER} (1040)"),
    ("steel, 42CrMo4", 7850, 7872, f"{CALLISTER} (4140)"),
    ("steel, 34CrNiMo6", 7850, 7872, f"{CALLISTER} (4340)"),
    ("stainless steel 1.4301", 7900, 8000, f"{EN_10088}; {CALLISTER}"),
    ("stainless steel 1.4404", 8000, 8000, f"{EN_10088}; {CALLISTER}"),
    ("stainless steel 1.4016", 7700, 7700, EN_10088),
    ("stainless steel 1.4462", 7800, 7800, EN_10088),
    ("stainless steel 1.4542", 7800, 7800, EN_10088),
    ("grey cast iron", 7000, 7400, f"{GERE}; {CALLISTER} 7300"),
    ("ductile cast iron", 7000, 7400, f"{GERE}; {CALLISTER} 7100"),
    ("aluminium", 2600, 2800, GERE),
    ("aluminium EN AW-6061", 2700, 2700, CALLISTER),
    ("aluminium EN AW-7075", 2800, 2810, f"{CALLISTER}; {GERE}"),
    ("aluminium EN AW-2024", 2770, 2770, CALLISTER),
    ("aluminium EN AW-1100", 2699, 2710, f"{CALLISTER}; {NIST}"),
    ("magnesium AZ31B", 1760, 1830, f"{GERE}; {DATABASE} 1770"),
    ("magnesium AZ91E", 1760, 1830, f"{GERE}; {DATABASE} 1810"),
    ("titanium Ti-6Al-4V", 4420, 4430, "data sheets"),
    ("titanium", 4500, 4540, f"{GERE}; {NIST}"),
    ("brass", 8400, 8600, GERE),
    ("brass CuZn30", 8520, 8530, f"{DATABASE}; {NIST}"),
    ("bronze", 8200, 8820, f"{GERE}; {NIST}"),
    ("copper", 8890, 8960, f"{DATABASE}; {NIST}"),
    ("lead", 11350, 11350, NIST),
    ("zinc", 7133, 7133, NIST),
    ("nickel", 8902, 8902, NIST),
    ("tungsten", 19300, 19300, NIST),
    ("POM", 1410, 1425, f"{PLASTICS}; {NIST}"),
    ("PA6", 1130, 1160, PLASTICS),
    ("PA66", 1140, 1140, f"{PLASTICS}; {NIST}"),
    ("ABS", 1030, 1060, PLASTICS),
    ("PMMA", 1170, 1200, f"{CALLISTER}; {NIST} 1190"),
    ("PET", 1350, 1360, f"{CALLISTER}; {PLASTICS}"),
    ("PTFE", 2140, 2200, f"{CALLISTER} 2170; {PLASTICS} 2190; {NIST} 2200"),
    ("PVC", 1300, 1580, CALLISTER),
    ("PP", 905, 905, CALLISTER),
    ("PS", 1050, 1050, CALLISTER),
    ("rubber", 960, 1300, GERE),
    ("natural rubber", 920, 1037, f"{NIST}; {PLASTICS}"),
    ("chloroprene rubber", 1230, 1230, NIST),
    ("FKM rubber", 1800, 1800, NIST),
    ("concrete", 2300, 24_000 / 9.80665, f"{GERE}; {EUROCODE} 24.0 kN/m³"),
    ("reinforced concrete", 2400, 25_000 / 9.80665, f"{GERE}; {EUROCODE} 25.0 kN/m³"),
    ("Douglas fir", 460, 560, f"{GERE}; {CALLISTER}"),
    ("oak", 640, 720, GERE),
    ("southern pine", 560, 640, GERE),
    ("softwood C24", 420, 420, f"{EUROCODE}, mean"),
    ("glass", 2400, 2800, GERE),
    ("water", 998.2, 1000, f"{TANAKA}, 998.2067 at 20 °C from memory; {GERE}"),
    ("sea water", 1020, 1020, GERE),
]


@pytest.mark.parametrize(("name", "low", "high", "source"), PRINTED, ids=[row[0] for row in PRINTED])
def test_density_lies_in_the_printed_range(name: str, low: float, high: float, source: str) -> None:
    assert low <= material(name).density <= high, source


def test_what_no_source_was_opened_for_says_so() -> None:
    compared = {row[0] for row in PRINTED} | {"steel, S355", "stainless steel"}  # the same figures as their neighbours
    assert [known.name for known in MATERIALS if known.name not in compared and "from memory" not in known.source] == []


def test_the_density_of_water_is_that_of_the_published_formula_at_20_degrees() -> None:
    """Tanaka 2001: a5·(1 − (t+a1)²(t+a2)/(a3(t+a4))), coefficients from memory; maximum 999.975 kg/m³."""

    def of_water(t: float) -> float:
        return 999.974950 * (1 - (t - 3.983035) ** 2 * (t + 301.797) / (522528.9 * (t + 69.34881)))

    assert of_water(16.0) == pytest.approx(998.9468, abs=0.005)  # a measured sample, printed in the abstract
    assert material("water").density == pytest.approx(of_water(20.0), abs=0.05)
