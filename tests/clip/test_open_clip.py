"""Containers, codecs, flags and timing faults: true times, or a refusal that says why."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import av
import numpy as np
import pytest

from swingtrack.clip import open_clip
from swingtrack.errors import BadClip
from tests.clip.clips import Recipe, even_ticks, write_clip


def read_times(file: Path, **options: float) -> tuple[np.ndarray, object]:
    with open_clip(file, **options) as clip:
        return np.array([frame.t_s for frame in clip.frames()]), clip


def codes(clip: object) -> set[str]:
    return {doubt.code for doubt in clip.doubts()}  # type: ignore[attr-defined]


@pytest.mark.parametrize(
    ("name", "codec", "pixel_format"),
    [
        ("a.mp4", "libx264", "yuv420p"),
        ("a.mov", "libx264", "yuv420p"),
        ("a.3gp", "libx264", "yuv420p"),
        ("a.mkv", "libx264", "yuv420p"),
        ("a.mp4", "libx265", "yuv420p"),
        ("a.mp4", "libx265", "yuv420p10le"),
        ("a.webm", "libvpx-vp9", "yuv420p"),
        ("a.mkv", "libsvtav1", "yuv420p"),
        ("a.mp4", "mpeg4", "yuv420p"),
        ("a.avi", "mpeg4", "yuv420p"),
    ],
)
def test_containers_and_codecs_give_the_true_times(
    tmp_path: Path, name: str, codec: str, pixel_format: str
) -> None:
    if codec not in av.codecs_available:
        pytest.skip(f"this PyAV has no encoder {codec}")
    base = Fraction(1, 30) if name.endswith("avi") else Fraction(1, 600)
    ticks = even_ticks(30, 1 if name.endswith("avi") else 20)
    options = {"x265-params": "log-level=error"} if codec == "libx265" else {}
    size = (192, 128)  # the least that every encoder here takes
    recipe = Recipe(ticks, codec, pixel_format, base, size=size, codec_options=options)
    times, _clip = read_times(write_clip(tmp_path / name, recipe))
    # Matroska and WebM keep whole milliseconds
    np.testing.assert_allclose(
        times, np.arange(30) / 30.0, atol=0.51e-3 if name.endswith(("mkv", "webm")) else 1e-9
    )
    with open_clip(tmp_path / name) as again:
        frame = next(iter(again.frames()))
        assert frame.luma.shape == (128, 192)
        assert frame.depth == (10 if "10" in pixel_format else 8)
        assert frame.chroma_u is not None
        assert frame.chroma_u.shape == (64, 96)


def test_uneven_and_dropped_frames_keep_their_own_times(tmp_path: Path) -> None:
    rng = np.random.default_rng(3)
    ticks = np.cumsum(rng.integers(18, 23, 60))
    ticks = np.delete(ticks - ticks[0], [10, 31, 32])
    times, clip = read_times(write_clip(tmp_path / "a.mp4", Recipe(ticks.tolist())))
    np.testing.assert_allclose(times, ticks / 600.0, atol=1e-9)
    facts = clip.facts()  # type: ignore[attr-defined]
    assert facts.dropped_frames == 3
    assert facts.interval_spread_ms == pytest.approx(1000 * np.std([18, 19, 20, 21, 22]) / 600, rel=0.2)


def test_a_start_offset_and_an_edit_list_do_not_shift_the_first_frame(tmp_path: Path) -> None:
    ticks = [1200 + tick for tick in even_ticks(30)]
    times, _ = read_times(write_clip(tmp_path / "a.mp4", Recipe(ticks)))
    np.testing.assert_allclose(times, np.arange(30) / 30.0, atol=1e-9)


def test_repeated_images_are_found(tmp_path: Path) -> None:
    repeat = frozenset({9, 27, 44})
    times, clip = read_times(write_clip(tmp_path / "a.mp4", Recipe(even_ticks(), repeat=repeat)))
    found = {int(np.argmin(np.abs(times - t))) for t in clip.repeated_times()}  # type: ignore[attr-defined]
    assert found == repeat
    assert "file-retimed" in codes(clip)


def test_sound_and_other_tracks_are_ignored(tmp_path: Path) -> None:
    times, _ = read_times(write_clip(tmp_path / "a.mp4", Recipe(even_ticks(30), sound=True)))
    assert times.size == 30


def test_slow_motion_by_the_files_own_key(tmp_path: Path) -> None:
    recipe = Recipe(
        even_ticks(30),
        container_options={"movflags": "use_metadata_tags"},
        metadata={"com.android.capture.fps": "240.000000"},
    )
    times, clip = read_times(write_clip(tmp_path / "a.mp4", recipe))
    np.testing.assert_allclose(times, np.arange(30) / 240.0, rtol=1e-9)
    facts = clip.facts()  # type: ignore[attr-defined]
    assert facts.capture_rate_hz == pytest.approx(240.0)
    assert facts.time_scale == pytest.approx(1 / 8)


def test_slow_motion_by_the_users_word(tmp_path: Path) -> None:
    times, _ = read_times(write_clip(tmp_path / "a.mp4", Recipe(even_ticks(30))), capture_rate_hz=120.0)
    np.testing.assert_allclose(times, np.arange(30) / 120.0, rtol=1e-9)


def test_times_that_look_stretched_are_called_out(tmp_path: Path) -> None:
    # exactly 30 frames/s on a clock of 2400 ticks, as a phone stores 240 frames/s (docs/filming.md)
    ticks = even_ticks(30, 80)
    clock: dict[str, object] = {
        "time_base": Fraction(1, 2400),
        "container_options": {"video_track_timescale": "2400"},
    }
    _, clip = read_times(write_clip(tmp_path / "a.mov", Recipe(ticks, **clock)))  # type: ignore[arg-type]
    assert "times-look-stretched" in codes(clip)
    wavering = [tick + i % 3 for i, tick in enumerate(ticks)]
    _, plain = read_times(write_clip(tmp_path / "b.mov", Recipe(wavering, **clock)))  # type: ignore[arg-type]
    assert "times-look-stretched" not in codes(plain)


def test_a_cut_file_is_used_as_far_as_it_is_whole(tmp_path: Path) -> None:
    whole = write_clip(tmp_path / "a.mp4", Recipe(even_ticks(), container_options={"movflags": "+faststart"}))
    cut = tmp_path / "cut.mp4"
    cut.write_bytes(whole.read_bytes()[: int(whole.stat().st_size * 0.7)])
    times, clip = read_times(cut)
    assert 20 < times.size < 60
    assert codes(clip) & {"clip-cut", "frames-damaged"}


@pytest.mark.parametrize("turn", [90, 180, 270])
def test_the_rotation_flag_turns_coordinates_there_and_back(tmp_path: Path, turn: int) -> None:
    from swingtrack.rehearse import Film, RehearsalSettings, Stage, rehearse_clip
    from swingtrack.rig import rig_from_mapping

    rig = rig_from_mapping(
        {
            "article": {"mass": "0.5 kg", "expected_moment": "0.005 kg m^2"},
            "suspension": {"kind": "bifilar", "length": "1 m", "upper_spacing": "0.2 m"},
        }
    )
    film = Film(width=320, height=192, duration_s=0.5, rotation_deg=turn, noise=0.0, crf=12)
    stage = Stage(
        clutter=0, strings=False, dot_bgr=(255, 255, 255), article_bgr=(20, 20, 20), dot_diameter_m=0.05
    )
    truth = rehearse_clip(rig, tmp_path / "a.mp4", settings=RehearsalSettings(film=film, stage=stage))
    with av.open(str(tmp_path / "a.mp4")) as container:
        if int(next(container.decode(video=0)).rotation) % 360 == 0:
            pytest.skip("this PyAV can't write the rotation flag")
    with open_clip(tmp_path / "a.mp4") as clip:
        frame = next(iter(clip.frames()))
        weight = np.clip(frame.luma.astype(float) - 200, 0, None)
        rows, columns = np.mgrid[0 : frame.luma.shape[0], 0 : frame.luma.shape[1]]
        centre = (
            np.array([(weight * columns).sum() / weight.sum()]),
            np.array([(weight * rows).sum() / weight.sum()]),
        )
        x, y = clip.upright(*centre)
        assert (x[0], y[0]) == pytest.approx((truth.x_px[0], truth.y_px[0]), abs=0.3)
        np.testing.assert_allclose(clip.stored(x, y), centre)
        assert clip.first_image().shape == (192, 320, 3)


@pytest.mark.parametrize(
    ("content", "said"),
    [
        (b"", "empty"),
        (b"words about swings\n" * 99, "can't be opened"),
        (None, "no file"),
        ("folder", "folder"),
    ],
)
def test_what_is_no_clip_is_refused(tmp_path: Path, content: bytes | str | None, said: str) -> None:
    file = tmp_path / "x.mp4"
    if isinstance(content, bytes):
        file.write_bytes(content)
    elif content == "folder":
        file.mkdir()
    with pytest.raises(BadClip, match=said):
        open_clip(file)


def test_sound_alone_is_refused(tmp_path: Path) -> None:
    with av.open(str(tmp_path / "a.mp4"), "w") as container:
        stream = container.add_stream("aac", rate=48_000, layout="mono")
        frame = av.AudioFrame.from_ndarray(
            np.zeros((1, 1024), dtype=np.float32), format="fltp", layout="mono"
        )
        frame.sample_rate, frame.pts = 48_000, 0
        container.mux(stream.encode(frame))
        container.mux(stream.encode())
    with pytest.raises(BadClip, match="no video track"):
        open_clip(tmp_path / "a.mp4")
