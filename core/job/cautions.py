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
    "Water above 50 °C (122 °F) scalds. Before working on a heater switch it off, let it cool, and relieve the "
    "pressure.",
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

CAUSTIC_BURNS = Caution(
    "caustic_burns",
    "danger",
    "Caustic soda burns skin and blinds, lye and beads alike. Goggles, face shield, gloves and apron of rubber; "
    "running water and an eye wash within reach. Beads go into cold water, slowly, never water onto beads.",
    "common practice, no source",
)
LIME_BURNS = Caution(
    "lime_burns",
    "danger",
    "Lime burns eyes, lungs and wet skin. Tight goggles, a dust mask, gloves and long sleeves; rinse eyes for 15 "
    "minutes and see a doctor at once.",
    "common practice, no source",
)
SLAKING = Caution(
    "slaking",
    "danger",
    "Quicklime gets hot enough with water to boil it and to start fires. Slake it only in equipment made for it, lime "
    "into water; keep it dry and away from wood and paper.",
    "common practice, no source",
)
SODA_DUST = Caution(
    "soda_dust",
    "care",
    "Soda ash dust stings eyes and lungs, and its solution is strong lye to the eye: goggles, dust mask, gloves. Stir "
    "it into water, not water onto it.",
    "common practice, no source",
)
SODIUM_DOSED = Caution(
    "sodium_dosed",
    "care",
    "Soda ash and caustic leave their sodium in the water. People on a sodium-restricted diet, and whoever prepares "
    "food for infants, need to know; ask a physician.",
    "EPA-SODIUM",
)
NEVER_TOGETHER = Caution(
    "never_together",
    "danger",
    "Keep it apart from acids, chlorine products, alum and iron salts, aluminium and zinc: heat, gas or hydrogen. "
    "Never use one pump, tank or scoop for two chemicals. Feed lime and soda ash apart: together they set hard.",
    "common practice, no source",
)
CERTIFIED_FEED = Caution(
    "certified_feed",
    "care",
    "For drinking water use chemicals and feed equipment certified for it (NSF/ANSI 60 and 61, EN 12518, EN 896, EN "
    "897), with an anti-siphon valve, and a switch that stops the pump when the water stops.",
    "common practice, no source",
)
LICENSED_OPERATOR = Caution(
    "licensed_operator",
    "care",
    "Changing the treatment of a public supply needs the approval of its authority and a licensed operator, who tests "
    "pH, hardness and alkalinity of the treated water daily. Local law comes before anything said here.",
    "common practice, no source",
)
HIGH_PH = Caution(
    "high_ph",
    "care",
    "Dosed water may be far above pH 9.5: nobody drinks or bathes in it until pH is back within the local limits.",
    "common practice, no source",
)
SLUDGE = Caution(
    "sludge",
    "note",
    "Sludge and rinse water are waste with a high pH: where they go is for the local authority to say, never into a "
    "stream, and into a sewer only with leave.",
    "common practice, no source",
)
CHANGED_SOURCE = Caution(
    "changed_source",
    "care",
    "A change of source or share changes the water in old pipes: deposits, lead and copper may come loose. Change "
    "slowly, flush, and test at the taps; a public supply asks its authority first.",
    "common practice, no source",
)
CROSS_CONNECTION = Caution(
    "cross_connection",
    "care",
    "Sources are joined only behind check valves and backflow protection by the local code: a private well and a "
    "public main never without an air gap.",
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


def dose_cautions(chemicals: tuple[str, ...], slaked: bool) -> tuple[Caution, ...]:
    """What to mind when feeding "soda_ash", "lime" or "caustic"; `slaked`: the lime comes as quicklime."""
    return (
        *((CAUSTIC_BURNS,) if "caustic" in chemicals else ()),
        *((LIME_BURNS,) if "lime" in chemicals else ()),
        *((SLAKING,) if "lime" in chemicals and slaked else ()),
        *((SODA_DUST,) if "soda_ash" in chemicals else ()),
        NEVER_TOGETHER,
        HIGH_PH,
        *((SODIUM_DOSED,) if "caustic" in chemicals or "soda_ash" in chemicals else ()),
        CERTIFIED_FEED,
        LICENSED_OPERATOR,
        SLUDGE,
    )


def source_cautions() -> tuple[Caution, ...]:
    """What to mind when several sources are joined."""
    return (CHANGED_SOURCE, CROSS_CONNECTION, LICENSED_OPERATOR, NOT_DISINFECTED)
