"""Seeds, fixed once: what is tuned on, what is reported, what nobody looks at until the end."""

TUNING_SEEDS = range(1_000, 5_000)  # look at these as often as you like
REPORTED_SEEDS = range(500_000, 502_000)  # the figures in README.md come from these
HELD_OUT_SEEDS = range(900_000, 902_000)  # never looked at while anything is tuned
DEMO_SEEDS = range(700_000, 700_100)  # the files in demo_spectra/

NAMED = {"tuning": TUNING_SEEDS, "reported": REPORTED_SEEDS, "held-out": HELD_OUT_SEEDS}
