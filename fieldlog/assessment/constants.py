"""The constants of the method, in one table; DEVELOPERS.md, Method, says where each is used."""

from __future__ import annotations

# Reading error, 1 sigma (§1)
READING_SIGMA_PSI = 0.5
LEAST_DIAL_SIGMA_PSI = 0.25
UNKNOWN_DIVISION_PSI = 2.0  # where neither division nor heap is known; named in the reasons
HEAP_RUN = 6
HEAP_STEPS = {"psi": (10, 5, 2), "kPa": (50, 20, 10), "bar": (0.5, 0.2, 0.1)}
HEAP_TOLERANCE = 0.01  # of a step

# Gauge bias, 1 sigma is half the permissible error (§1)
UNKNOWN_GRADE_PERCENT = 3.0
UNKNOWN_FULL_SCALE_PSI = 300.0  # the usual dial, common practice
# Permissible error, percent of full scale: outer quarters, middle half. ASME B40.100; all but A from memory.
GRADE_PERCENT = {
    "4A": (0.1, 0.1),
    "3A": (0.25, 0.25),
    "2A": (0.5, 0.5),
    "1A": (1.0, 1.0),
    "A": (2.0, 1.0),
    "B": (3.0, 2.0),
    "C": (4.0, 3.0),
    "D": (5.0, 5.0),
}
COMPARISON_AGEING_PERCENT = 0.3  # of full scale per root of a year

# Statics (§1)
UNKNOWN_ELEVATION_PSI = 2.5
STATIC_BEFORE_ONLY_PSI = 2.0
RECOVERY_S = 180.0
RECOVERY_LEAST_PSI = 3.0
SLOW_RETURN_S = 60.0  # own choice; a quick return takes seconds, 180 s is no return

# Ten percent criterion (§3)
TEN_PERCENT = 10

# Expected band, trend (§6, §7)
BAND_TESTS = 4
BAND_QUANTILE = 0.995
TREND_DATES = 6

# Suspected impairment (§8)
NEAR_ZERO_PSI = 5.0
NEAR_ZERO_SHARE = 0.1
QUARTER_PERCENT = 25
STATIC_WITHOUT_BAND_PSI = 6.0

# Measured margin (§8, until the re-rating)
MARGIN_BAND_PSI = 5.0
DESIGN_BAND_PSI = 8.0  # §5: of the static of a design curve
EVEN_PSI = 1e-6  # a limit met exactly is met in every unit
NORMAL_90 = 1.645  # one-sided 5 percent, for a band that an unknown elevation widens
LEAST_DROP_SHARE = 0.10  # NFPA 291, newer editions, from memory: less may not be drawn beyond the tested flow

# Drain (§5, §8)
DRAIN_K_BY_SIZE = ((1.75, 42.0), (1.1, 19.0), (0.0, 6.5))  # from this size on, in.: 2 in., 1-1/4 in., 3/4 in.
DRAIN_COEFFICIENT = 0.85  # of a drain's open end, the middle of 0.8 to 0.9
DRAIN_K_RESIDUAL_PSI = 60.0  # at which the K of a drain of known length is taken

# Blind loss (§8): found with 90 percent probability at 5 percent false alarms
BLIND_FACTOR = 2.93
BLIND_MODEL = 0.06
BLIND_NONLINEAR = 0.35
BLIND_ROUNDS = 200
BLIND_TOLERANCE_PSI = 1e-6
FINE_GAUGE_DIVISION_PSI = 0.5

# Window (§9, cost): the newest tests of a system that are judged by, with every acceptance test
MOST_TESTS = 200
