"""The library's few names, given lazily, and the study that they fill."""

import subprocess
import sys
from concurrent.futures import ThreadPoolExecutor

import pytest

import axis
import axis.study
from axis.study import NO_LOOPS
from tests.cli.command import DEMO, ENVIRONMENT, RAM, ROOT


def test_names():
    assert axis.__all__ == ["check", "load", "size", "tune"]
    for name in axis.__all__:
        assert getattr(axis, name) is getattr(axis.study, name)
        assert name in dir(axis)
    with pytest.raises(AttributeError, match="has no attribute 'select'"):
        _ = axis.select
    with pytest.raises(ImportError):
        from axis import absent  # noqa: F401


def test_import_of_the_package_loads_nothing_of_it():
    script = "import sys; import axis; print(*sorted(n for n in sys.modules if n.partition('.')[0] == 'axis'))"
    done = subprocess.run(
        [sys.executable, "-c", script], cwd=ROOT, env=ENVIRONMENT, capture_output=True, text=True, check=True
    )
    assert done.stdout.split() == ["axis"]


def test_the_verdict_is_the_worst_of_what_was_asked():
    study = axis.load(RAM)
    assert study.verdict == "not evaluated"
    assert axis.check(study).verdict == "fail"
    assert axis.size(study).verdict == "not evaluated"
    assert axis.check(axis.size(study)).verdict == "fail"
    demo = axis.size(axis.load(DEMO))
    assert demo.verdict == "pass"
    unevaluated = axis.check(demo)
    assert (unevaluated.verdict, unevaluated.unevaluated, unevaluated.settled) == ("not evaluated", NO_LOOPS, None)


def test_progress_and_executor_of_the_caller():
    shares = []
    with ThreadPoolExecutor(1) as workers:
        alone = axis.check(axis.load(RAM), lambda share, words: shares.append((share, words)), workers)
        assert workers.submit(int).result() == 0  # the caller's executor is left open
    assert shares[0] == (pytest.approx(1 / 11), "1 of 11 corners")
    assert shares[-1] == (1.0, "11 of 11 corners")
    assert axis.check(axis.load(RAM)).settled == alone.settled
