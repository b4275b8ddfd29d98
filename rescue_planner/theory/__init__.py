"""Published formulas as pure functions on numbers and arrays.

Nothing here knows a case, a file, a compiler or a window. Every function broadcasts over leading
axes ``...`` (parameter draws, plans, time), so one definition serves one plan and many draws;
a plain number in gives a numpy number out.

Letters used in shapes
----------------------
D : donors, S = D + 1 : sources of parents (residents first), T : steps of time, A : age classes,
n : gene copies (2Ne rounded), so that a distribution over a frequency has n + 1 states.
"""
