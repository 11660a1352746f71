"""Cautions: what can hurt somebody or break something, each with its rule for when it shows and its source.

They are the usual cautions of the trade; local codes and licensed practice come first.
"""

from __future__ import annotations

from core.job.answers import Caution

LOCAL_CODE = Caution(
    "local_code",
    "note",
    "Connection, backflow protection and the drain are work for a licensed installer under the local code, "
    "which comes before anything said here.",
    "common practice, no source",
)
AIR_GAP = Caution(
    "air_gap",
    "care",
    "The drain hose ends in an air gap of two pipe diameters, at least 25 mm (1 in), never in a direct "
    "connection: waste water must not get back into the drinking water.",
    "UPC2021-603",
)
SODIUM = Caution(
    "sodium",
    "care",
    "Softening with common salt adds sodium. People on a sodium-restricted diet, and whoever prepares food for "
    "infants, need water from a tap that is not softened; ask a physician.",
    "EPA-SODIUM",
)
POTASSIUM = Caution(
    "potassium",
    "care",
    "Softening with potassium chloride adds potassium. People with kidney disease or on certain medicines must "
    "not drink it without asking their physician.",
    "common practice, no source",
)
METALS = Caution(
    "metals",
    "care",
    "Old lead pipes, new solder joints, copper with sour water and unprotected galvanised steel deserve a test "
    "of the tap water after softening. Trials found no steady rise of metals, and a regulator advises against "
    "softening the drinking tap: both stand.",
    "EPA-SOFTENING",
)
NOT_DISINFECTED = Caution(
    "not_disinfected",
    "care",
    "A softener does not disinfect and does not remove nitrate, arsenic, bacteria or organics. Have a private "
    "well tested for those.",
    "common practice, no source",
)
IRON = Caution(
    "iron",
    "care",
    "So much iron fouls the resin. Remove it before the softener, or clean the resin as its maker says.",
    "VAC590-900",
)
HOT_ANODE = Caution(
    "anode",
    "note",
    "The anode of a storage heater may be used up faster in softened water: look at it earlier than usual.",
    "HEATER-SITES",
)
SCALD = Caution(
    "scald",
    "danger",
    "Water above 50 °C scalds. Before working on a heater switch it off, let it cool, and relieve the pressure.",
    "common practice, no source",
)

INDICES = Caution(
    "indices",
    "note",
    "Indices say which way a water leans, not how fast a pipe corrodes. They are computed as if no phosphate or other "
    "inhibitor were in the water.",
    "common practice, no source",
)
METALS_IN_SOUR_WATER = Caution(
    "sour_water",
    "care",
    "Water below pH 7.4 with much carbon dioxide takes up copper, and lead where old pipes or solder are left: have "
    "the first water of the morning tested before anyone drinks it.",
    "common practice, no source",
)

IRON_CARE = 1.0  # mg/L, from where a household softener needs help; common practice, no source


def softener_cautions(salt: str, iron: float | None) -> tuple[Caution, ...]:
    """What to mind with a softener regenerated with "nacl" or "kcl", on water with so much iron [mg/L]."""
    return (
        *((IRON,) if iron is not None and iron >= IRON_CARE else ()),
        *blend_cautions(salt)[:-1],
        AIR_GAP,
        NOT_DISINFECTED,
        HOT_ANODE,
        LOCAL_CODE,
    )


def blend_cautions(salt: str) -> tuple[Caution, ...]:
    """What to mind with softened water at the taps, blended or not."""
    return (POTASSIUM if salt == "kcl" else SODIUM, METALS, LOCAL_CODE)


def scale_cautions() -> tuple[Caution, ...]:
    """What to mind when speaking of lime, heaters and pipes."""
    return (INDICES, METALS_IN_SOUR_WATER)
