"""A stand-in for the engine: microseconds a placement, every number follows from the study's values alone."""

import os
import time

from ergo.evaluation.results import RATING_NAMES
from ergo.explore.outcome import COLUMNS

PAUSE_S = 0.004


def judge(study):
    length, lean = study.lever.length_mm, study.lever.start_deg
    found = dict.fromkeys(COLUMNS)
    for n, name in enumerate(RATING_NAMES):
        value = (length / 7.0 + 3.1 * n + lean / 3.0) % 100.0
        found |= {name: value, f"{name}_low": value - 1.0 / 3.0, f"{name}_high": value + 1.0 / 3.0}
    found |= {"verdict": "meets" if found["served"] > 50.0 else "falls short", "missed": "", "cause": "elbow"}
    found |= {"worst_stroke": lean / 90.0, "hand_travel_mm": length * 1.2, "tool_mm_per_hand_mm": 40.0 / length}
    return found | {"largest_demand_n": 9000.0 / length}


def slow_judge(study):
    time.sleep(PAUSE_S)
    return judge(study)


def recorded_judge(study):
    """As `slow_judge`, and a line in the file that the environment names: who judged which placement."""
    line = f"{os.getpid()} {study.lever.length_mm:g} {study.lever.start_deg:g}\n"
    file = os.open(os.environ["PULLWARD_TEST_RECORD"], os.O_WRONLY | os.O_APPEND | os.O_CREAT)
    os.write(file, line.encode())
    os.close(file)
    return slow_judge(study)
