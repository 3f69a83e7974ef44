"""Symbols of the elements that the tables may name."""

from __future__ import annotations

# By atomic number from 1 (IUPAC Red Book, table of the elements).
SYMBOLS = (
    "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Kr Rb Sr Y Zr "
    "Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir "
    "Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U"
).split()
AFTER_URANIUM = "Np"  # only its binding energies, since the lines of uranium need them
WITH_LINES = frozenset(SYMBOLS[2:])  # hydrogen and helium have too few electrons for an Auger transition
NUMBERS = {symbol: z for z, symbol in enumerate((*SYMBOLS, AFTER_URANIUM), start=1)}
