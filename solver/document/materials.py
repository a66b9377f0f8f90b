"""The built-in materials: conductivity, density, specific heat, emissivity, each row with where it comes from.

Values are for about 25 °C and meant for early layout work. "From memory" means recalled and not looked up again; the
book named is one where such a value is commonly found. "Typical class value" means the middle of what makers state.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from types import MappingProxyType

from .layout import Material


@dataclass(frozen=True)
class Entry:
    """One material; emissivity of the bare surface as commonly met, None where it means nothing."""

    name: str
    title: str
    group: str
    material: Material
    emissivity: float | None
    source: str


INCROPERA = "from memory: Bergman et al., Fundamentals of Heat and Mass Transfer, appendix A"
ASM = "from memory: ASM Handbook, vol. 2 (nonferrous) and vol. 1 (steels)"
CRC = "from memory: CRC Handbook of Chemistry and Physics"
CLASS = "typical class value, no single source"
IPC = "from memory: typical laminate data of the kind IPC-4101 sheets are filled with"
DIN_EN = "from memory: EN ISO 10456, tabulated design values"

# name, title, k in W/(m K) (one value, or in-plane and through), density kg/m³, specific heat J/(kg K), emissivity, source
_ROWS: dict[str, tuple[tuple, ...]] = {
    "coppers": (
        ("copper", "Copper, electrolytic tough pitch", 390.0, 8930.0, 385.0, 0.05, INCROPERA),
        ("copper-foil", "Copper foil, electrodeposited", 385.0, 8900.0, 385.0, 0.07, CLASS),
        ("copper-beryllium", "Copper-beryllium, age hardened", 110.0, 8250.0, 420.0, 0.10, ASM),
        ("brass", "Brass, 30 % zinc", 110.0, 8530.0, 380.0, 0.10, INCROPERA),
        ("bronze-aluminium", "Aluminium bronze", 60.0, 7600.0, 420.0, 0.15, ASM),
    ),
    "aluminiums": (
        ("aluminium", "Aluminium, commercially pure", 220.0, 2705.0, 900.0, 0.07, ASM),
        ("aluminium-3003", "Aluminium alloy 3003", 160.0, 2730.0, 890.0, 0.07, ASM),
        ("aluminium-5052", "Aluminium alloy 5052", 138.0, 2680.0, 880.0, 0.07, ASM),
        ("aluminium-6061", "Aluminium alloy 6061-T6", 167.0, 2700.0, 896.0, 0.07, ASM),
        ("aluminium-6063", "Aluminium alloy 6063-T5", 209.0, 2690.0, 900.0, 0.07, ASM),
        ("aluminium-7075", "Aluminium alloy 7075-T6", 130.0, 2810.0, 960.0, 0.07, ASM),
        ("aluminium-cast-a356", "Cast aluminium A356-T6", 151.0, 2680.0, 963.0, 0.20, ASM),
        ("aluminium-die-cast-a380", "Die-cast aluminium A380", 96.0, 2710.0, 963.0, 0.20, ASM),
    ),
    "other metals": (
        ("steel-carbon", "Carbon steel, 1 % C or less", 50.0, 7850.0, 470.0, 0.30, INCROPERA),
        ("steel-stainless-304", "Stainless steel 304", 14.9, 7900.0, 477.0, 0.20, INCROPERA),
        ("iron-cast-grey", "Grey cast iron", 50.0, 7200.0, 490.0, 0.44, ASM),
        ("nickel", "Nickel", 90.7, 8900.0, 444.0, 0.10, INCROPERA),
        ("titanium-6al-4v", "Titanium Ti-6Al-4V", 6.7, 4430.0, 526.0, 0.20, ASM),
        ("magnesium-az91", "Cast magnesium AZ91", 72.0, 1810.0, 1050.0, 0.15, ASM),
        ("zinc-die-cast", "Zinc die-casting alloy", 113.0, 6600.0, 419.0, 0.20, ASM),
        ("silver", "Silver", 429.0, 10500.0, 235.0, 0.02, INCROPERA),
        ("gold", "Gold", 317.0, 19300.0, 129.0, 0.03, INCROPERA),
        ("tungsten", "Tungsten", 174.0, 19300.0, 132.0, 0.05, INCROPERA),
        ("molybdenum", "Molybdenum", 138.0, 10240.0, 251.0, 0.05, INCROPERA),
    ),
    "composites and graphite": (
        ("copper-molybdenum-30-70", "Copper-molybdenum, 30 % Cu by weight", 195.0, 9800.0, 290.0, 0.10, CLASS),
        ("copper-tungsten-20-80", "Copper-tungsten, 20 % Cu by weight", 200.0, 15600.0, 180.0, 0.10, CLASS),
        ("aluminium-silicon-carbide", "Aluminium-silicon carbide, 63 % SiC", 190.0, 3000.0, 740.0, 0.30, CLASS),
        ("graphite-sheet-pyrolytic", "Pyrolytic graphite sheet, 25 to 70 µm", (1350.0, 13.0), 1900.0, 850.0, 0.80, CLASS),
        ("graphite-sheet-natural", "Natural graphite sheet, compressed", (300.0, 5.0), 1300.0, 790.0, 0.80, CLASS),
        ("graphite-isotropic", "Isotropic moulded graphite", 100.0, 1800.0, 710.0, 0.80, CLASS),
    ),
    "ceramics": (
        ("alumina-96", "Alumina, 96 %", 24.0, 3750.0, 880.0, 0.80, CLASS),
        ("alumina-995", "Alumina, 99.5 %", 32.0, 3890.0, 880.0, 0.80, CLASS),
        ("aluminium-nitride", "Aluminium nitride substrate", 170.0, 3260.0, 740.0, 0.80, CLASS),
        ("silicon-nitride", "Silicon nitride substrate", 85.0, 3200.0, 680.0, 0.85, CLASS),
        ("beryllia", "Beryllium oxide, 99.5 %", 265.0, 2900.0, 1020.0, 0.60, CLASS),
        ("glass-borosilicate", "Borosilicate glass", 1.1, 2230.0, 830.0, 0.90, CRC),
        ("sapphire", "Sapphire", 40.0, 3980.0, 760.0, 0.60, CRC),
    ),
    "semiconductors": (
        ("silicon", "Silicon, lightly doped, 25 °C", 148.0, 2330.0, 712.0, 0.60, INCROPERA),
        ("silicon-carbide", "Silicon carbide 4H, 25 °C", 370.0, 3210.0, 690.0, 0.80, CLASS),
        ("gallium-nitride", "Gallium nitride, 25 °C", 160.0, 6150.0, 490.0, None, CLASS),
        ("gallium-arsenide", "Gallium arsenide, 25 °C", 46.0, 5320.0, 330.0, None, CRC),
    ),
    "laminates": (
        ("fr4", "FR-4 laminate without copper", (0.9, 0.3), 1900.0, 1100.0, 0.90, IPC),
        ("fr4-high-tg", "FR-4 laminate, high glass transition", (0.8, 0.35), 1950.0, 1050.0, 0.90, IPC),
        ("prepreg", "Glass-epoxy prepreg, cured", (0.6, 0.3), 1850.0, 1100.0, 0.90, IPC),
        ("polyimide-film", "Polyimide film", 0.16, 1420.0, 1090.0, 0.80, CLASS),
        ("laminate-ceramic-filled", "Ceramic-filled radio-frequency laminate", 0.65, 1850.0, 900.0, 0.90, CLASS),
        ("laminate-ptfe-glass", "Glass-reinforced PTFE laminate", (0.45, 0.25), 2200.0, 960.0, 0.90, CLASS),
        ("solder-mask", "Solder mask", 0.25, 1400.0, 1200.0, 0.90, CLASS),
    ),
    "insulated-metal-board dielectrics": (
        ("dielectric-1", "Board dielectric, 1 W/mK class", 1.0, 1700.0, 1000.0, None, CLASS),
        ("dielectric-2", "Board dielectric, 2 W/mK class", 2.0, 2100.0, 950.0, None, CLASS),
        ("dielectric-3", "Board dielectric, 3 W/mK class", 3.0, 2400.0, 900.0, None, CLASS),
        ("dielectric-5", "Board dielectric, 5 W/mK class", 5.0, 2700.0, 880.0, None, CLASS),
        ("dielectric-8", "Board dielectric, 8 W/mK class", 8.0, 2900.0, 850.0, None, CLASS),
    ),
    "joining": (
        ("solder-sac305", "Solder, tin-silver-copper", 58.0, 7400.0, 230.0, None, CLASS),
        ("solder-sn63pb37", "Solder, tin-lead eutectic", 50.0, 8400.0, 170.0, None, CLASS),
        ("solder-gold-tin", "Solder, gold-tin 80/20", 57.0, 14500.0, 150.0, None, CLASS),
        ("sintered-silver", "Sintered silver layer", 200.0, 8600.0, 240.0, None, CLASS),
        ("adhesive-silver-epoxy", "Silver-filled epoxy adhesive", 2.5, 3500.0, 600.0, None, CLASS),
        ("grease-standard", "Interface grease, 0.8 W/mK class", 0.8, 2300.0, 900.0, None, CLASS),
        ("grease-filled", "Interface grease, 4 W/mK class", 4.0, 2600.0, 850.0, None, CLASS),
        ("pad-soft", "Gap pad, 1.5 W/mK class", 1.5, 2000.0, 1000.0, None, CLASS),
        ("pad-3", "Gap pad, 3 W/mK class", 3.0, 2800.0, 950.0, None, CLASS),
        ("pad-6", "Gap pad, 6 W/mK class", 6.0, 3200.0, 900.0, None, CLASS),
    ),
    "plastics, foams and air": (
        ("abs", "ABS plastic", 0.19, 1050.0, 1400.0, 0.90, DIN_EN),
        ("polycarbonate", "Polycarbonate", 0.20, 1200.0, 1200.0, 0.90, DIN_EN),
        ("polyamide-66", "Polyamide 66", 0.25, 1140.0, 1670.0, 0.90, DIN_EN),
        ("polyamide-66-glass", "Polyamide 66, 30 % glass", 0.30, 1450.0, 1500.0, 0.90, DIN_EN),
        ("polyphenylene-sulfide", "Polyphenylene sulfide, 40 % glass", 0.30, 1650.0, 1000.0, 0.90, CLASS),
        ("plastic-heat-conducting", "Filled heat-conducting plastic", (5.0, 1.5), 1700.0, 1000.0, 0.90, CLASS),
        ("epoxy-moulding", "Epoxy moulding compound", 0.9, 1850.0, 900.0, 0.90, CLASS),
        ("silicone-rubber", "Silicone rubber", 0.35, 1200.0, 1000.0, 0.90, DIN_EN),
        ("foam-polyurethane", "Polyurethane foam, rigid", 0.028, 30.0, 1400.0, 0.90, DIN_EN),
        ("foam-polystyrene", "Expanded polystyrene foam", 0.035, 25.0, 1450.0, 0.90, DIN_EN),
        ("mineral-wool", "Mineral wool", 0.040, 60.0, 1030.0, 0.90, DIN_EN),
        ("still-air", "Still air, 25 °C (conduction only)", 0.026, 1.18, 1007.0, None, INCROPERA),
    ),
}


def _entry(group: str, name: str, title: str, k, density: float, heat: float, emissivity: float | None, source: str) -> Entry:
    conduction = {"k_w_mk": k} if isinstance(k, float) else {"k_in_plane_w_mk": k[0], "k_through_w_mk": k[1]}
    material = Material(**conduction, density_kg_m3=density, specific_heat_j_kgk=heat)
    return Entry(name, title, group, material, emissivity, source)


MATERIALS: Mapping[str, Entry] = MappingProxyType(
    {row[0]: _entry(group, *row) for group, rows in _ROWS.items() for row in rows})


def nearest_names(name: str, among: Iterable[str] = ()) -> list[str]:
    """Up to three known names like the given one, nearest first; a few common ones when none is like it."""
    known = list(dict.fromkeys(among)) or list(MATERIALS)
    near = difflib.get_close_matches(name.lower(), known, n=3, cutoff=0.4)
    return near or [n for n in ("copper", "aluminium", "fr4") if n in known]
