"""A seeded share of the broken files: each ends in a result or one clear refusal."""

from __future__ import annotations

import pytest

from tests.benchmarks.broken_files import judge_files


@pytest.mark.slow
def test_broken_files_end_in_a_result_or_a_refusal() -> None:
    outcomes = judge_files(count=2000, seed=5, measure_share=0.01)
    assert set(outcomes) <= {"result", "refused", "nothing"}, outcomes
    assert outcomes["refused"] > 200
