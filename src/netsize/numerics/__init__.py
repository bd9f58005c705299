"""Floor 0: stateless numerics over arrays, without words of the domain.

Noncentral densities and tails, distributions on a grid, monotone integer search. Needs only numpy,
`scipy.special` and `scipy.optimize`. Every function broadcasts its arguments and returns float64;
an argument outside its range gives nan in that place, never an exception.
"""
