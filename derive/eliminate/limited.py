"""Elimination in a process of its own, with limits on its time and its memory.

What is multiplied out may fill the memory of any machine, and a call into FLINT can neither be stopped nor
does it survive want of memory. A process that keeps limits ends, and this one goes on and says so.
"""

from __future__ import annotations

import pickle
import subprocess
import sys
from pathlib import Path
from typing import Any

from derive.eliminate.derivation import Derivation, Plan
from derive.errors import TooLargeError
from derive.nodal.system import NodalSystem
from derive.quantities.words import rounded_count

# What follows on the elimination takes minutes by then, and a gigabyte.
MOST_TERMS = 100_000
SECONDS = 60.0
MEGABYTES = 1500
SCRIPT = Path(__file__).with_name("limited_child.py")


def eliminate_within_limits(
    system: NodalSystem,
    plan: Plan,
    terms: int | None,
    seconds: float = SECONDS,
    megabytes: int = MEGABYTES,
) -> Derivation:
    """Give the derivation, multiplied out, if that can be had within the limits.

    Given: the number of terms of the denominator, None where it is past counting.
    Raises: TooLargeError where there are too many terms, or a limit was met.
    """
    if terms is not None and terms > MOST_TERMS:
        raise _refusal(system, terms, f"more than the {MOST_TERMS:,} that can be worked")
    question = pickle.dumps((system.small_signal, system.find, plan))
    with subprocess.Popen(
        # -P: the folder of the script must not shadow modules of the libraries.
        [sys.executable, "-P", str(SCRIPT), str(megabytes), str(int(seconds) + 1)],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
    ) as process:
        try:
            answer, _ = process.communicate(question, seconds)
        except subprocess.TimeoutExpired:
            raise _refusal(system, terms, f"not written out within {seconds:g} s") from None
        finally:
            # Ended by itself or not: nothing stays behind, whatever went wrong here.
            process.kill()
    if process.returncode or not answer:
        raise _refusal(system, terms, f"not to be written out within {seconds:g} s and {megabytes:,} MB")
    return _derivation(system, plan, pickle.loads(answer))


def _derivation(system: NodalSystem, plan: Plan, found: Any) -> Derivation:
    if isinstance(found, str):
        raise TooLargeError(found, where=str(system.find.place), cure=_cure(system))
    steps, top, bottom = found
    context = system.ring.plain().context
    return Derivation(system, plan, steps, context.from_dict(top), context.from_dict(bottom))


def _refusal(system: NodalSystem, terms: int | None, why: str) -> TooLargeError:
    count = f"{rounded_count(terms)} terms" if terms is not None else "terms past counting"
    what = f"the denominator of {system.find.name} has {count}: {why}"
    return TooLargeError(what, where=str(system.find.place), cure=_cure(system))


def _cure(system: NodalSystem) -> str:
    if system.small_signal.topology.form == "expanded":
        return 'take form = "expanded" out of [sheet]: the nested form has no such limit'
    return "split it into stages, or merge its parallel and series parts"
