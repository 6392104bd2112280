"""What several tests share: the shipped examples, built once a run."""

from __future__ import annotations

import os
import time
from pathlib import Path

import pytest
from hypothesis import settings

# A busy machine is no fault; what lands must not depend on chance. By hand every run tries new cases.
settings.register_profile("calm", deadline=None)
settings.register_profile("landing", deadline=None, derandomize=True)
settings.load_profile("landing" if os.environ.get("CI") else "calm")

ROOT = Path(__file__).parent.parent
_SUM = 0.023  # seconds of processor that the sum below took where the bounds on time were set


@pytest.fixture(scope="session")
def allowed():
    """A bound in seconds of processor, for a machine as slow as this one is at the moment."""

    def bound(seconds: float) -> float:
        begun = time.process_time()
        sum(each * each % 7 for each in range(300_000))
        return seconds * max(1.0, (time.process_time() - begun) / _SUM)

    return bound


@pytest.fixture(scope="session")
def example_job():
    """Path of an example's job file by its name."""
    return lambda name: ROOT / "examples" / name / "job.toml"


@pytest.fixture(scope="session")
def built(tmp_path_factory, example_job):
    """Build an example, once a run, and give the folder."""
    from calcpack.build import build_job

    done: dict[str, Path] = {}

    def build(name: str) -> Path:
        if name not in done:
            done[name] = tmp_path_factory.mktemp("built") / name
            build_job(example_job(name), done[name])
        return done[name]

    return build
