"""Thread counts of the linear algebra are the user's own again when the solver is done."""

from __future__ import annotations

import pytest

from blockload.response import threads


def counts() -> list[int]:
    return [int(getter()) for getter, _ in threads._libraries()]


def test_one_thread_within_and_the_users_count_after() -> None:
    before = counts()
    with threads.one_thread():
        assert set(counts()) <= {1}
        threads.use_for(2 * threads.LARGE)
        assert set(counts()) <= {threads.available()}
        threads.use_for(1.0)
        assert set(counts()) <= {1}

    assert counts() == before


def test_the_count_comes_back_after_an_error() -> None:
    before = counts()
    with pytest.raises(RuntimeError), threads.one_thread():
        raise RuntimeError

    assert counts() == before


def test_a_file_that_is_no_library_is_passed_over(tmp_path) -> None:
    path = tmp_path / "libopenblas.so"
    path.write_text("text")

    assert threads._functions(path) == []
