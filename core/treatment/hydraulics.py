"""Water through a bed of beads: pressure loss in service, expansion in backwash, with the water's
temperature.

viscosity(temperature [°C]) -> mPa·s;  water_density(temperature) -> kg/m³
bed_pressure_loss(velocity [m/h], depth [m], temperature, bead=0.6 [mm], voids=0.38) -> kPa
fitting_loss(flow, rated_flow [L/min], rated_loss [kPa]) -> kPa          valve, distributor, bypass
terminal_velocity(temperature, bead, density=1290 [kg/m³]) -> m/h
backwash_velocity(temperature, expansion=0.5, bead, density, voids) -> m/h
bed_expansion(velocity, temperature, bead, density, voids) -> share of the settled depth
freeboard(height [mm], depth [m], below=0.1 [m]) -> m;  freeboard_share(freeboard, depth) -> share
"""

from __future__ import annotations

from core.treatment.broadcast import Number, broadcasts, larger, only_where, power, ratio
from core.working import formula

GRAVITY = 9.80665  # m/s² [EXACT]
BEAD = 0.6  # mm, mean of 0.3 to 1.2; from memory
BEAD_DENSITY = 1290.0  # kg/m³, wet bead; 1250 to 1300, from memory
VOIDS = 0.38  # settled bed; 0.36 to 0.40, from memory
_SECONDS_PER_HOUR = 3600.0
_VELOCITY = 1.0 / _SECONDS_PER_HOUR  # m/h to m/s


@formula(
    "Viscosity of water",
    "log10(μ ÷ 1.002) = (20 − t) ÷ (t + 96) × (1.2364 − 1.37·10⁻³ (20 − t) + 5.7·10⁻⁶ (20 − t)²)",
    unit="mPa·s",
    takes={"temperature": "°C"},
    source="KESTIN78",
    validity="0 to 150 °C.",
)
@broadcasts
def viscosity(temperature: Number) -> Number:
    """Dynamic viscosity of water [KESTIN78]; NaN below 0 °C. [mPa·s]"""
    known = only_where(temperature >= 0.0, temperature)
    below = 20.0 - known
    return 1.002 * 10.0 ** (below / (known + 96.0) * (1.2364 - 1.37e-3 * below + 5.7e-6 * below * below))


@formula(
    "Density of water",
    "ratio of polynomials in t",
    unit="kg/m³",
    takes={"temperature": "°C"},
    source="KELL75",
    validity="0 to 150 °C, air-free water at 1 atm.",
)
@broadcasts
def water_density(temperature: Number) -> Number:
    """Density of water [KELL75]. [kg/m³]"""
    t = temperature
    above = 999.83952 + t * (
        16.945176 + t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 - t * 280.54253e-12)))
    )
    return ratio(above, 1.0 + 16.879850e-3 * t)


@formula(
    "Pressure loss of the bed",
    "Δp = depth × (150 μ u (1−ε)² ÷ (ε³ d²) + 1.75 ρ u² (1−ε) ÷ (ε³ d))",
    unit="kPa",
    takes={"velocity": "m/h", "depth": "m", "temperature": "°C", "bead": "mm", "voids": ""},
    source="ERGUN52",
    validity="Clean, settled, even spheres. Fines, dirt and iron raise it; valve and distributor usually lose more.",
)
@broadcasts
def bed_pressure_loss(
    velocity: Number, depth: Number, temperature: Number, bead: Number = BEAD, voids: Number = VOIDS
) -> Number:
    """Pressure lost in a settled bed at this velocity. [kPa]"""
    u, d = velocity * _VELOCITY, bead / 1000.0
    solid, cube = 1.0 - voids, voids * voids * voids
    viscous = ratio(150.0 * viscosity(temperature) / 1000.0 * u * solid * solid, cube * d * d)
    inertial = ratio(1.75 * water_density(temperature) * u * u * solid, cube * d)
    return depth * (viscous + inertial) / 1000.0


@formula(
    "Pressure loss of the fittings",
    "loss = rated loss × (flow ÷ rated flow)²",
    unit="kPa",
    takes={"flow": "L/min", "rated_flow": "L/min", "rated_loss": "kPa"},
    source="common practice, no source",
    validity="Turbulent flow through valve, distributor and bypass; from the maker's one point.",
)
@broadcasts
def fitting_loss(flow: Number, rated_flow: Number, rated_loss: Number) -> Number:
    """Pressure lost in valve, distributor and bypass at this flow. [kPa]"""
    share = ratio(flow, rated_flow)
    return rated_loss * share * share


def _archimedes(temperature: Number, bead: Number, density: Number) -> Number:
    water, d, mu = water_density(temperature), bead / 1000.0, viscosity(temperature) / 1000.0
    return larger(water * (density - water) * GRAVITY * d * d * d / (mu * mu), 0.0)


def _exponent(archimedes: Number) -> Number:
    """Exponent of the voids in a fluidised bed [KHAN-RICHARDSON89], wall effect left out."""
    k = 0.043 * power(archimedes, 0.57)
    return (4.8 + 2.4 * k) / (1.0 + k)


@formula(
    "Terminal velocity of a bead",
    "18 Re + 2.7 Re^1.687 = Ar",
    unit="m/h",
    takes={"temperature": "°C", "bead": "mm", "density": "kg/m³"},
    source="SCHILLER-NAUMANN33",
    validity="A single sphere, Reynolds number below 800. NaN for beads lighter than water.",
)
@broadcasts
def terminal_velocity(temperature: Number, bead: Number = BEAD, density: Number = BEAD_DENSITY) -> Number:
    """Velocity at which a single bead sinks in still water. [m/h]"""
    target = _archimedes(temperature, bead, density)
    reynolds = ratio(target, 18.0 + power(target, 0.58))
    for _ in range(12):  # Newton on a curve that only bends one way; six steps reach the last digits
        drag = power(reynolds, 0.687)
        miss = reynolds * (18.0 + 2.7 * drag) - target
        reynolds = reynolds - ratio(miss, 18.0 + 2.7 * 1.687 * drag)
    mu = viscosity(temperature) / 1000.0
    return ratio(reynolds * mu, water_density(temperature) * bead / 1000.0) * _SECONDS_PER_HOUR


@formula(
    "Backwash velocity",
    "u = terminal velocity × εⁿ, with ε = 1 − (1 − ε₀) ÷ (1 + expansion)",
    unit="m/h",
    takes={"temperature": "°C", "expansion": "", "bead": "mm", "density": "kg/m³", "voids": ""},
    source="RICHARDSON-ZAKI54",
    validity="Even beads; real resin is a mix of sizes, so fines go first: stay below the velocity that "
    "lifts them out.",
)
@broadcasts
def backwash_velocity(
    temperature: Number,
    expansion: Number = 0.5,
    bead: Number = BEAD,
    density: Number = BEAD_DENSITY,
    voids: Number = VOIDS,
) -> Number:
    """Velocity that expands the bed by this share of its settled depth. [m/h]"""
    open_share = 1.0 - ratio(1.0 - voids, 1.0 + expansion)
    n = _exponent(_archimedes(temperature, bead, density))
    return terminal_velocity(temperature, bead, density) * power(open_share, n)


@formula(
    "Expansion in backwash",
    "expansion = (1 − ε₀) ÷ (1 − (u ÷ terminal velocity)^(1/n)) − 1",
    unit="",
    takes={"velocity": "m/h", "temperature": "°C", "bead": "mm", "density": "kg/m³", "voids": ""},
    source="RICHARDSON-ZAKI54",
    validity="NaN where the velocity carries the beads away.",
)
@broadcasts
def bed_expansion(
    velocity: Number,
    temperature: Number,
    bead: Number = BEAD,
    density: Number = BEAD_DENSITY,
    voids: Number = VOIDS,
) -> Number:
    """Growth of the bed at this backwash velocity, as a share of its settled depth; none below
    fluidisation. [-]
    """
    share = ratio(velocity, terminal_velocity(temperature, bead, density))
    n = _exponent(_archimedes(temperature, bead, density))
    open_share = power(only_where(share < 1.0, share), ratio(1.0, n))
    return larger(ratio(1.0 - voids, 1.0 - open_share) - 1.0, 0.0)


@formula(
    "Freeboard",
    "freeboard = height ÷ 1000 − space below the bed − depth",
    unit="m",
    takes={"height": "mm", "depth": "m", "below": "m"},
    source="definition",
    validity="Height of the straight vessel; distributor or gravel take the space below the bed.",
)
@broadcasts
def freeboard(height: Number, depth: Number, below: Number = 0.1) -> Number:
    """Free height above the settled bed, for its expansion; negative where the bed does not fit. [m]"""
    return height / 1000.0 - below - depth


@formula(
    "Freeboard as a share of the bed",
    "share = freeboard ÷ depth",
    unit="",
    takes={"free": "m", "depth": "m"},
    source="common practice, no source",
    validity="Half the depth for beds that are backwashed, 75 to 100 % in cold water.",
)
@broadcasts
def freeboard_share(free: Number, depth: Number) -> Number:
    """Free height above the bed over its depth: what the bed may expand in backwash. [-]"""
    return ratio(free, depth)
