"""From a record to a filled ledger: readings, calibrations, moisture, bases, diluents, rates, balance.

Run by run, in the order in which the methods print their equations.  Every step is a ledger entry; what
cannot be computed becomes a problem that names what is missing.
"""
