"""The energy axis: its priors, its fit to a spectrum, and its calibration with reference metals."""

from __future__ import annotations

from .axis import CHARGING_FROM_EV, ELEMENT_SIGMA_EV, AxisFit, AxisPrior, fit_axis, usual_axis

__all__ = ["CHARGING_FROM_EV", "ELEMENT_SIGMA_EV", "AxisFit", "AxisPrior", "fit_axis", "usual_axis"]
