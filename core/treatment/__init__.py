"""Treatment: how much water, how hard, which softener, how it is set, what a blend gives.

One unit per quantity, everywhere in this folder: volume L, daily volume L/day, flow L/min, hardness mmol/L (two-valent
ions), load and capacity mol (of two-valent hardness; 1 mol = 2 eq), capacity of resin eq/L, salt kg, salt dose g/L of
resin, velocity m/h, specific flow bed volumes per hour, temperature °C, pressure kPa, Na, K, Fe and Mn mg/L. Lengths
say m or mm. Each module's docstring lists its functions; nothing is imported here, so each screen pays only for what it
uses.

    demand, peak_flow                     water used in a day and at once
    softener, resin, vessel, regeneration load, capacity against salt, bed, steps of a regeneration
    search, cost, valve                   every bed, dose and arrangement; prices; settings of the head
    running                               simulated days: how often hard water reaches the tap
    exchange, column, column_run          the resin bed as cells at equilibrium: leakage, ceiling of capacity, waste
    hydraulics                            pressure loss and expansion of a bed
    rules                                 rules and hygiene by region
    blending, sources, limits             two streams, many sources, limits of what is dissolved
"""
