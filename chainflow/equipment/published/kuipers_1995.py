"""How many of the Fischer-Tropsch chains of a length are 1-alkenes?

The ratio of olefins to paraffins falls like ``A exp(-c n)`` with the chain length n from 3 on:
the form is that of Kuipers, Vinkenburg, Oosterbeek, J. Catal. 152 (1995) 137 (M); the numbers lie
in the ranges of the trade, from memory: 1 to 3 at n = 3 on cobalt, 3 to 6 on iron, c 0.2 to 0.35,
0.05 to 0.3 at n = 2. Branched chains, internal olefins and oxygenates are left out.
"""

SOURCE = "olefins: form of Kuipers et al., J. Catal. 152 (1995) 137, numbers from memory (M)"
AT_THREE = 2.0  # olefins per paraffin at n = 3
DECLINE = 0.3  # per carbon atom
AT_TWO = 0.1  # ethylene per ethane
