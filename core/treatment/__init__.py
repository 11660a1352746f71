"""Treatment: how much water, how hard, which softener, how it is set, what a blend gives.

One unit per quantity, everywhere in this folder: volume L, daily volume L/day, flow L/min, hardness mmol/L
(two-valent ions), load and capacity mol (of two-valent hardness; 1 mol = 2 eq), capacity of resin eq/L,
salt kg, salt dose g/L of resin, velocity m/h, specific flow bed volumes per hour, temperature °C, pressure
kPa, Na, K, Fe and Mn mg/L. Lengths say m or mm. Each module's docstring lists its functions; nothing is
imported here, so each screen pays only for what it uses.
"""
