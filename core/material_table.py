"""The table of materials: density with the spread between sources, and the source.

Room temperature, solid stock. A printed part or a casting with pores is lighter than its material.
"from memory" marks a value that no source was opened for; check it before relying on it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, TypeAlias


@dataclass(frozen=True)
class Material:
    """A material that parts are made of.

    Attributes:
        name: as shown; no two materials share it.
        density: kg/m³.
        low: the lowest value that the sources print for it, kg/m³.
        high: the highest.
        source: where the values are from.
        group: the heading it stands under.
        also: other names that find it.
    """

    name: str
    density: float
    low: float
    high: float
    source: str
    group: str
    also: tuple[str, ...] = ()


_CALLISTER: Final = "Callister, Materials Science and Engineering, Table B.1"
_GERE: Final = "Gere, Mechanics of Materials, 5th ed., Table H-1"
_EN_10088: Final = "EN 10088-1, as tabulated by a tube maker"
_NIST: Final = "NIST composition data"
_DATABASE: Final = "Materials Properties Database"
_PLASTICS: Final = "handbook table of plastics"
_EUROCODE: Final = "EN 1991-1-1 and EN 338"
_MEMORY: Final = "from memory"
_TANAKA: Final = f"Tanaka et al., Metrologia 38 (2001) 301, at 20 °C, {_MEMORY}"

# name, density, low, high, source, other names separated by ";"
_Row: TypeAlias = tuple[str, float, float, float, str, str]

_ROWS: Final[dict[str, tuple[_Row, ...]]] = {
    "steel and iron": (
        ("steel", 7850, 7850, 7874, f"{_GERE}; {_NIST} (iron)", "carbon steel;low-alloy steel"),
        ("steel, S235", 7850, 7850, 7872, _CALLISTER, "S235JR;1.0038;A36;mild steel;structural steel"),
        ("steel, S355", 7850, 7850, 7872, _CALLISTER, "S355J2;1.0577"),
        ("steel, C45", 7850, 7850, 7872, _CALLISTER, "C45E;1.0503;1.1191;1040"),
        ("steel, 42CrMo4", 7850, 7850, 7872, _CALLISTER, "1.7225;4140"),
        ("steel, 34CrNiMo6", 7850, 7850, 7872, _CALLISTER, "1.6582;4340"),
        ("steel, 100Cr6", 7810, 7810, 7850, _MEMORY, "1.3505;52100;bearing steel"),
        ("stainless steel", 7900, 7700, 8000, f"{_EN_10088}; {_CALLISTER}", ""),
        ("stainless steel 1.4301", 7900, 7900, 8000, f"{_EN_10088}; {_CALLISTER}", "1.4301;304;X5CrNi18-10"),
        ("stainless steel 1.4404", 8000, 7900, 8000, f"{_EN_10088}; {_CALLISTER}", "1.4404;316L;316"),
        ("stainless steel 1.4016", 7700, 7700, 7800, f"{_EN_10088}; {_CALLISTER}", "1.4016;430;X6Cr17"),
        ("stainless steel 1.4462", 7800, 7800, 7800, _EN_10088, "1.4462;duplex;2205"),
        ("stainless steel 1.4542", 7800, 7650, 7800, f"{_EN_10088}; {_CALLISTER}", "1.4542;17-4PH;630"),
        ("grey cast iron", 7300, 7000, 7400, f"{_CALLISTER}; {_GERE}", "EN-GJL;grey iron;cast iron"),
        ("ductile cast iron", 7100, 7000, 7400, f"{_CALLISTER}; {_GERE}", "EN-GJS;ductile iron"),
    ),
    "light metals": (
        ("aluminium", 2700, 2600, 2800, _GERE, "aluminum;aluminium alloy"),
        ("aluminium EN AW-1100", 2710, 2699, 2710, f"{_DATABASE}; {_NIST}", "1100;Al99"),
        ("aluminium EN AW-2024", 2770, 2770, 2800, f"{_CALLISTER}; {_GERE}", "2024;AlCu4Mg1"),
        ("aluminium EN AW-5083", 2660, 2600, 2800, f"{_MEMORY}; spread {_GERE}", "5083;AlMg4.5Mn0.7"),
        ("aluminium EN AW-6061", 2700, 2600, 2800, f"{_CALLISTER}; spread {_GERE}", "6061;AlMg1SiCu"),
        ("aluminium EN AW-6082", 2700, 2600, 2800, f"{_MEMORY}; spread {_GERE}", "6082;AlSi1MgMn"),
        ("aluminium EN AW-7075", 2810, 2800, 2810, f"{_CALLISTER}; {_GERE}", "7075;AlZn5.5MgCu"),
        ("magnesium AZ31B", 1770, 1760, 1830, f"{_DATABASE}; spread {_GERE}", "AZ31"),
        ("magnesium AZ91E", 1810, 1760, 1830, f"{_DATABASE}; spread {_GERE}", "AZ91"),
        ("titanium", 4500, 4500, 4540, f"{_GERE}; {_NIST}", "titanium grade 2"),
        ("titanium Ti-6Al-4V", 4430, 4420, 4430, "data sheets", "Ti6Al4V;TiAl6V4;3.7165;titanium grade 5"),
    ),
    "heavy metals": (
        ("brass", 8500, 8400, 8600, _GERE, "CuZn39Pb3;C36000"),
        ("brass CuZn30", 8530, 8520, 8530, f"{_DATABASE}; {_NIST}", "C26000;cartridge brass"),
        ("bronze", 8800, 8200, 8820, f"{_DATABASE}; {_GERE}; {_NIST}", "CuSn8"),
        ("copper", 8900, 8890, 8960, f"{_GERE}; {_DATABASE}; {_NIST}", "Cu-ETP;C11000"),
        ("lead", 11350, 11340, 11350, _NIST, ""),
        ("nickel", 8902, 8800, 8902, f"{_NIST}; {_GERE}", ""),
        ("tungsten", 19300, 19300, 19400, f"{_NIST}; {_GERE} by weight", ""),
        ("tungsten heavy alloy", 17500, 17000, 18500, _MEMORY, "balance weight"),
        ("zinc", 7133, 7130, 7140, _NIST, ""),
        ("zinc die-casting alloy", 6700, 6600, 6750, _MEMORY, "ZnAl4Cu1"),
    ),
    "plastics": (
        ("ABS", 1050, 1030, 1060, _PLASTICS, ""),
        ("PA6", 1130, 1130, 1160, _PLASTICS, "polyamide 6;nylon 6"),
        ("PA66", 1140, 1130, 1160, f"{_PLASTICS}; {_NIST}", "polyamide 66;nylon 66"),
        ("PC", 1200, 1190, 1220, _MEMORY, "polycarbonate"),
        ("PE-HD", 955, 940, 965, _MEMORY, "HDPE;polyethylene"),
        ("PEEK", 1310, 1290, 1320, _MEMORY, ""),
        ("PET", 1355, 1350, 1360, f"{_CALLISTER}; {_PLASTICS}", "PET-P;polyester"),
        ("PETG, printed solid", 1270, 1230, 1290, _MEMORY, "PETG"),
        ("PLA, printed solid", 1250, 1240, 1250, f"a print service's page; {_MEMORY}", "PLA"),
        ("PMMA", 1190, 1170, 1200, f"{_CALLISTER}; {_NIST}", "acrylic glass"),
        ("POM", 1410, 1410, 1425, f"{_PLASTICS}; {_NIST}", "POM-C;polyoxymethylene;acetal"),
        ("PP", 905, 900, 910, _CALLISTER, "polypropylene"),
        ("PS", 1050, 1040, 1060, _CALLISTER, "polystyrene"),
        ("PTFE", 2170, 2140, 2200, f"{_CALLISTER}; {_PLASTICS}; {_NIST}", ""),
        ("PVC", 1400, 1300, 1580, _CALLISTER, ""),
    ),
    "rubber and composites": (
        ("rubber", 1100, 960, 1300, _GERE, ""),
        ("natural rubber", 920, 920, 1037, f"{_NIST}; {_PLASTICS}", "NR"),
        ("chloroprene rubber", 1230, 1230, 1250, _NIST, "CR"),
        ("FKM rubber", 1800, 1800, 1900, _NIST, "FKM;FPM"),
        ("carbon-fibre laminate", 1550, 1500, 1600, _MEMORY, "CFRP"),
        ("glass-fibre laminate", 1850, 1700, 2000, _MEMORY, "GFRP;FR4"),
    ),
    "wood, mineral, liquid": (
        ("oak", 680, 640, 720, _GERE, ""),
        ("Douglas fir", 520, 460, 560, f"{_GERE}; {_CALLISTER}", ""),
        ("southern pine", 600, 560, 640, _GERE, "pine"),
        ("softwood C24", 420, 350, 480, f"{_EUROCODE}; spread {_MEMORY}", "C24;spruce"),
        ("concrete", 2300, 2300, 2450, f"{_GERE}; {_EUROCODE}", "plain concrete"),
        ("reinforced concrete", 2400, 2400, 2550, f"{_GERE}; {_EUROCODE}", ""),
        ("glass", 2500, 2400, 2800, _GERE, ""),
        ("alumina ceramic", 3900, 3700, 3950, _MEMORY, "Al2O3"),
        ("water", 998.2, 998, 1000, f"{_TANAKA}; {_GERE}", ""),
        ("sea water", 1020, 1020, 1030, _GERE, ""),
    ),
}

MATERIALS: Final[tuple[Material, ...]] = tuple(
    Material(name, density, low, high, source, group, tuple(word for word in also.split(";") if word))
    for group, rows in _ROWS.items()
    for name, density, low, high, source, also in rows
)
