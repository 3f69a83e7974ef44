"""Pure functions on numbers. One absolute energy scale inside ident, and this is it:

kinetic energy of the minimum of the differential spectrum dN/dE, referenced to the Fermi level, at an
analyser resolution of 0.5 %. `levels` converts to and from it.
"""
