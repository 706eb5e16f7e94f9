"""What fuel, air and a measured oxygen imply for everything else in the flue gas.

`fuel` describes a fuel, `fuel_entries` and `stoichiometry` turn it into amounts, air need and F factors,
`run` solves the element balances of a run, `findings` names combinations that cannot occur together.
"""
