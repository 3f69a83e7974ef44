"""The energy axis: its priors, its fit to a spectrum, and its calibration with reference metals."""

from __future__ import annotations

from .axis import CHARGING_FROM_EV, ELEMENT_SIGMA_EV, AxisFit, AxisPrior, fit_axis, usual_axis
from .calibrate import calibrate, calibrate_scale, reference_metal
from .calibration import CalibrationLine, Deviation, ScaleCalibration
from .saved import load_scale, save_scale
from .sitting import FittedAxis, Sitting, find_sittings

__all__ = [
    "CHARGING_FROM_EV",
    "ELEMENT_SIGMA_EV",
    "AxisFit",
    "AxisPrior",
    "CalibrationLine",
    "Deviation",
    "FittedAxis",
    "ScaleCalibration",
    "Sitting",
    "calibrate",
    "calibrate_scale",
    "find_sittings",
    "fit_axis",
    "load_scale",
    "reference_metal",
    "save_scale",
    "usual_axis",
]
