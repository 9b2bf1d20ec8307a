"""A believable measurement with known numbers, made of arrays alone: no clip, no fit.

Reedwater Paddles, touring paddle 12, on two threads; the swing is drawn by its own formula and everything else is made up.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np

from swingtrack.records import (
    AgainstClip,
    Article,
    BudgetLine,
    Candidate,
    ClipFacts,
    Correction,
    DampingTerm,
    Doubt,
    Inertia,
    MarkerFacts,
    Measurement,
    Mode,
    MonteCarlo,
    Path,
    Quantity,
    Rig,
    Stopwatch,
    Suspension,
    Swing,
    SwingLaw,
    SwingTrace,
    Track,
    Trial,
    View,
)

PERIOD_S, DECAY_PER_S, START_RAD, NOISE_RAD = 3.10211, 0.0080185, 0.1395, 1.4e-4


def a_trace(*, samples: int = 600, unit: str = "rad", scale: float = 1.0) -> SwingTrace:
    """20 s of a damped swing at 30 frames a second, released at 1 s, with noise, a gap in time and two outliers."""
    rng = np.random.default_rng(20)
    t = np.arange(samples) / 30.0
    t = np.delete(t, [k for k in (200, 201) if k < samples])
    clean = START_RAD * np.exp(-DECAY_PER_S * t) * np.cos(2.0 * np.pi * t / PERIOD_S)
    free = (t >= 1.0) & (t <= t[-1])
    measured = np.where(free, clean + NOISE_RAD * rng.standard_normal(t.size), START_RAD)
    used = free.copy()
    outliers = [300, 411] if samples > 411 else []
    measured[outliers] += 30.0 * NOISE_RAD
    used[outliers] = False
    fitted = np.where(free, clean, np.nan)
    cycles = np.arange(2.0, t[-1] - PERIOD_S, PERIOD_S / 2)
    hz = np.linspace(0.0, 15.0, 400)
    return SwingTrace(
        t_s=t,
        measured=scale * measured,
        fitted=scale * fitted,
        used=used,
        amplitude=scale * np.where(free, START_RAD * np.exp(-DECAY_PER_S * t), np.nan),
        unit=unit,
        cycle_t_s=cycles,
        cycle_period_s=PERIOD_S * (1.0 + (START_RAD * np.exp(-DECAY_PER_S * cycles)) ** 2 / 16.0),
        free_from_s=1.0,
        free_to_s=float(t[-1]),
        spectrum_hz=hz,
        spectrum_residual=scale * NOISE_RAD / 20.0 * (0.5 + rng.random(hz.size)),
    )


def a_law() -> SwingLaw:
    amplitude = np.linspace(0.0, 0.3, 25)
    return SwingLaw(
        "bifilar", 0.3, np.array([1.0]), np.array([1.0]), amplitude, 1.0 + amplitude**2 / 16.0, 0.01
    )


def a_swing(**changed: Any) -> Swing:
    made = Swing(
        period=Quantity(3.102111723160592, 0.00010691306263410761, "s", dof=9475.3),
        period_in_clip=Quantity(3.104981063065183, 9.060421146460254e-05, "s"),
        decay_rate=Quantity(0.008018461589509895, 9.035646963334113e-06, "1/s", dof=844.9),
        half_life=Quantity(86.44391106976816, 0.09740979037401812, "s"),
        damping_ratio=Quantity(0.00395884610789828, 4.459583158510703e-06, "1"),
        quality_factor=Quantity(126.29942826078836, 0.14227448803266657, "1"),
        log_decrement=Quantity(0.024874358620521717, 2.802104611331085e-05, "1"),
        amplitude_start=Quantity(0.13952, 0.00137, "rad"),
        amplitude_end=Quantity(0.10970, 0.00108, "rad"),
        cycles=6.1,
        damping_law="viscous + quadratic",
        damping_terms=(
            DampingTerm("viscous", Quantity(0.0080, 1.2e-5, "1/s"), 0.94, 0.96),
            DampingTerm("quadratic", Quantity(0.00061, 0.00011, "1"), 0.06, 0.04),
        ),
        other_modes=(Mode(0.4541, 0.0123, "sway"), Mode(1.871, 0.0021, "bounce")),
        fit_rms=0.040165356244886825,
        fit_rms_unit="px",
        noise_correlation_time_s=0.026,
        amplitude_shift=0.000917,
        outliers=2,
        trace=a_trace(),
        law=a_law(),
    )
    return replace(made, **changed)


def an_inertia(**changed: Any) -> Inertia:
    made = Inertia(
        moment=Quantity(0.11319987470855729, 0.00014621463790906163, "kg m^2", dof=812.4),
        k=1.9629,
        about="vertical axis through the centre of mass",
        radius_of_gyration=Quantity(0.3523104733563508, 0.00022059314, "m"),
        budget=(
            BudgetLine("mass", 0.912, 2.9e-4, "kg", 0.12412, 3.5831e-05, 0.06005),
            BudgetLine("gravity", 9.8094, 1.15e-4, "m/s^2", 0.01154, 1.3325e-06, 8.3e-05),
            BudgetLine("length", 1.204, 5.7735e-4, "m", -0.09402, 5.4282e-05, 0.13783),
            BudgetLine("upper_spacing", 0.5, 2.8868e-4, "m", 0.4528, 0.00013071, 0.79919),
            BudgetLine("period", 3.1021117, 5.84e-05, "s", 0.07298, 4.2625e-06, 0.00085, 843.9),
            BudgetLine("clock", 0.0, 2.8868e-05, "1", 0.2264, 6.5356e-06, 0.002),
        ),
        corrections=(
            Correction(
                "amplitude",
                -0.00183172,
                0.0,
                True,
                "the period of small swings is used, not the clip's average",
            ),
            Correction("string mass", 0.0, 0.0, False, "string_mass not given"),
            Correction("buoyancy", -0.00015, 1.5e-5, False, "cancels on strings; 0.015 % is not applied"),
        ),
        monte_carlo=MonteCarlo(
            200000, 0.113200254, 0.000146058, (0.112934211682949, 0.11346665401621055), True
        ),
        advice=(
            "upper spacing makes 80 % of the variance: halving its doubt takes 37 % off the uncertainty.",
        ),
    )
    return replace(made, **changed)


def a_stopwatch() -> Stopwatch:
    trials = tuple(
        Trial(
            10,
            seconds,
            seconds / 10,
            "miscount" if seconds < 30 else "ok",
            swings_that_fit=9 if seconds < 30 else None,
        )
        for seconds in (31.06, 31.19, 28.07, 31.01, 31.03)
    )
    return Stopwatch(
        period=Quantity(3.109209979209979, 0.003868941316765326, "s", dof=4),
        trials=trials,
        scatter_s=0.084852507475902,
        method="mean",
        offset=None,
        further_trials_for_target=3,
        against_clip=AgainstClip(
            0.39363, Quantity(0.0431856, 0.0374679, "s", dof=4), "the runs agree with the clip"
        ),
    )


def a_path(*, name: str = "clips/paddle-12 evening.mp4") -> Path:
    trace = a_trace()
    x = 640.0 + 900.0 * np.sin(trace.measured)
    track = Track(
        x,
        np.full(x.size, 610.0),
        np.full(x.size, 0.04),
        np.full(x.size, 0.04),
        np.ones(x.size, dtype=np.bool_),
    )
    clip = ClipFacts(
        file=name,
        sha256="f0278250372b52ea7a1db7fdb8a1d65479db94c478cdb728f7473f860943041c",
        codec="h264",
        width=1280,
        height=720,
        rotation_deg=90,
        frames=598,
        duration_s=19.9667,
        stored_rate_hz=29.99937709858453,
        capture_rate_hz=29.99937709858453,
        time_scale=1.0,
        dropped_frames=2,
        repeated_frames=0,
        interval_spread_ms=0.5709372920566109,
        notes=("Frames are 33.334 ms apart as a rule; the file's own times are used.",),
    )
    marker = MarkerFacts("its swing", 598, 0, 19.7758, 0.04051, (Candidate(1, 678.7, 617.9, 19.9, 0.967),))
    return Path(trace.t_s, (track,), clip, marker)


def a_rig(*, article: str = "touring paddle 12") -> Rig:
    source = {
        "article": {"name": article, "mass": "0.912 kg ± 0.5 g", "axis": [0, 0, 1]},
        "suspension": {"kind": "bifilar", "length": "1.204 m ± 1 mm", "upper_spacing": "500 mm ± 0.5 mm"},
        "place": {"gravity": "9.8094 m/s^2 ± 0.0002 m/s^2"},
    }
    return Rig(
        Article(article, Quantity(0.912, 2.9e-4, "kg")),
        Suspension("bifilar", {"length": Quantity(1.204, 5.8e-4, "m")}),
        gravity=Quantity(9.8094, 1.15e-4, "m/s^2"),
        view=View("above"),
        source=source,
    )


DOUBTS = (
    Doubt(
        "mode-near",
        "Sway at 0.454 Hz is near the swing.",
        "Change the spacing by a third, so that the two part.",
    ),
    Doubt("few-cycles", "Only 6.1 cycles were seen.", "Film 15 or more."),
)


def a_measurement(**changed: Any) -> Measurement:
    """All parts present; `changed` replaces some."""
    rig = a_rig()
    inputs = {
        "clip": "clips/paddle-12 evening.mp4",
        "settings": {"dots": 1, "clock_ppm": 50.0},
        "rig": rig.source,
        "stopwatch": "trials.csv",
    }
    made = Measurement(a_path(), a_swing(), an_inertia(), a_stopwatch(), rig, inputs, DOUBTS)
    return replace(made, **changed)


def a_small_picture() -> bytes:
    """A PNG of one grey pixel's kind, 8 × 5, without any image library."""
    import struct
    import zlib

    def chunk(kind: bytes, data: bytes) -> bytes:
        return (
            struct.pack(">I", len(data))
            + kind
            + data
            + struct.pack(">I", zlib.crc32(kind + data) & 0xFFFFFFFF)
        )

    rows = b"".join(b"\x00" + bytes([120] * 8) for _ in range(5))
    return (
        b"\x89PNG\r\n\x1a\n"
        + chunk(b"IHDR", struct.pack(">IIBBBBB", 8, 5, 8, 0, 0, 0, 0))
        + chunk(b"IDAT", zlib.compress(rows))
        + chunk(b"IEND", b"")
    )
