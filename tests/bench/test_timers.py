from __future__ import annotations

import math

import pytest

from plumbfall.bench import read_bench


def timer(**keys):
    return read_bench({"timer": {"T": keys}}).timers["T"]


def test_a_stopwatch_has_its_usual_values_and_their_source():
    found = timer(kind="stopwatch")
    # Am. J. Phys. 87, 110 (2019): standard deviation of a start-stop difference, 0.10 s
    assert found.per_drop.value == 0.10
    # NIST Handbook 105-5, as quoted by NIST SOP 24: tolerance 0.02 %
    assert found.rate.u == pytest.approx(0.0002 / math.sqrt(3))
    assert found.rate.distribution == "rectangular"
    # common practice, no source: bias 0.03 s, display 0.01 s
    assert (found.bias.value, found.bias.u) == (0.0, 0.03)
    assert found.resolution.value == 0.01
    assert found.usual_values == ("per_drop", "bias", "rate", "resolution")
    assert "Am. J. Phys. 87, 110 (2019)" in found.usual_source
    assert "common practice, no source" in found.usual_source


def test_a_gate_and_a_video_have_theirs():
    gate, video = timer(kind="gate"), timer(kind="video")
    assert 0.001 <= gate.per_drop.value <= 0.005  # common practice, no source
    # two events each uniform within a frame: triangular, u = T/sqrt(6) (GUM 4.3.9); 13.6 ms at
    # 30 frames a second
    assert round(video.per_drop.value, 4) == 0.0136
    assert video.resolution is None
    assert video.usual_values == ("per_drop", "bias", "rate")


def test_a_frame_interval_given_as_resolution_is_not_counted_twice():
    found = timer(kind="video", resolution={"value": 1000 / 240, "unit": "ms"})
    assert found.per_drop.value == 0.0
    # what the resolution alone makes of an interval: two readings, each rectangular
    assert found.resolution.value * math.sqrt(2 / 12) == pytest.approx(1 / 240 / math.sqrt(6))


def test_what_is_given_stands():
    found = timer(kind="stopwatch", per_drop="0.20 s", bias="0.05(1) s")
    assert (found.per_drop.value, found.bias.value, found.bias.u) == (0.2, 0.05, 0.01)
    assert found.usual_values == ("rate", "resolution")
    assert "Am. J. Phys." not in found.usual_source


def test_without_kind_or_key_a_clock_is_exact():
    found = timer()
    for key in ("per_drop", "bias", "rate"):
        item = getattr(found, key)
        assert (item.value, item.u, item.name) == (0.0, 0.0, f"timer.T.{key}")
    assert (found.per_drop.unit, found.rate.unit) == ("s", "1")
    assert (found.resolution, found.usual_values, found.usual_source) == (None, (), "")


def test_usual_values_have_the_names_of_their_keys():
    found = timer(kind="stopwatch")
    assert found.bias.name == "timer.T.bias"
    assert found.rate.name == "timer.T.rate"
