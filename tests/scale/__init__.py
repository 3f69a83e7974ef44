"""Tests of energy scales: calibration with reference metals."""
