"""The numbers of one case: pools, columns, the LP, the skeleton ledger and what follows from them.

Two proton conventions, declared by the host: `motive-balanced` (motive protons are a balanced pool, plain H+ is
free in every compartment) and `inside-balanced` (H+ inside is balanced, motive and medium protons are free, so that
whatever a carrier lets in must be pumped out again).
"""
