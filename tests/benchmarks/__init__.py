"""The benchmark: a forward model of Auger spectra, the scoring of calls, and the plain way beside it."""
