"""A study as one JSON object: SI, the unit as the key's ending, null where a figure does not exist."""

from __future__ import annotations

import json
import math
from typing import TYPE_CHECKING, Any

from axis.cautions import cautions
from axis.description.settings import Loops
from axis.settling.verdict import MoveVerdict
from axis.sheet.shown import tool_version
from axis.simulation.record import MoveOutcome
from axis.study import Study
from axis.verdicts import Check

if TYPE_CHECKING:  # sizing alone loads neither the loops nor the compiler
    from axis.loops.margins import Margins
    from axis.tuning.result import Reference

FORMAT = 1


def size_json(study: Study) -> dict[str, Any]:
    """What `size` found."""
    checks = study.sizing.checks if study.sizing is not None else ()
    return _frame(study, checks) | _demand(study)


def tune_json(study: Study) -> dict[str, Any]:
    """The settings that tuning found, beside the textbook's and the bounds."""
    found = _frame(study, _settled_checks(study))
    return found if study.tuned is None else found | _loops(study) | _tuned(study)


def check_json(study: Study) -> dict[str, Any]:
    """Every move, nominal and at its worst corner."""
    return _frame(study, _settled_checks(study)) | _loops(study) | _moves(study)


def sheet_json(study: Study) -> dict[str, Any]:
    """Everything that the study holds."""
    sized = study.sizing.checks if study.sizing is not None else ()
    checks = (*sized, *_settled_checks(study))
    return _frame(study, checks) | _demand(study) | _loops(study) | _tuned(study) | _moves(study)


def to_json(study: Study) -> bytes:
    """The settings sheet as a JSON file."""
    return (json.dumps(sheet_json(study), allow_nan=False, ensure_ascii=False, indent=1) + "\n").encode()


def _frame(study: Study, checks: tuple[Check, ...]) -> dict[str, Any]:
    found: dict[str, Any] = {
        "format": FORMAT,
        "version": tool_version(),
        "axis": study.document.axis.head.name,
        "inputs": {"axis_file": study.document.digest, **study.document.catalogue_digests},
        "seed": study.tuned.seed if study.tuned is not None else None,
        "assumptions": [
            {"path": one.path, "text": one.text, "value": _finite(one.value)} for one in study.axis.assumptions
        ],
        "verdict": study.verdict,
        "checks": [_check(check) for check in checks],
        "cautions": [{"text": one.text, "governs": one.governs} for one in cautions(study.document.axis)],
    }
    if study.axis.warnings:
        found["warnings"] = list(study.axis.warnings)
    if study.unevaluated:
        found["unevaluated"] = study.unevaluated
    return found


def _check(check: Check) -> dict[str, Any]:
    return {
        "id": check.id,
        "name": check.name,
        "demand": _finite(check.demand),
        "limit": _finite(check.limit),
        "unit": check.unit,
        "margin": _finite(check.margin),
        "verdict": check.verdict,
        "source": check.source,
        "reason": check.reason,
        "remedy": check.remedy,
    }


def _settled_checks(study: Study) -> tuple[Check, ...]:
    return study.settled.all_checks if study.settled is not None else ()


def _demand(study: Study) -> dict[str, Any]:
    if study.sizing is None:
        return {}
    return {"demand": {key: _finite(value) for key, value in study.sizing.demand.as_json().items()}}


def _loops(study: Study) -> dict[str, Any]:
    loops = study.document.axis.loops
    return {} if loops is None else {"loops": _settings(loops)}


def _settings(loops: Loops) -> dict[str, Any]:
    return {
        "current": {"kp_V_per_A": loops.current.kp, "ti_s": loops.current.ti},
        "velocity": {
            "kp_Nms_per_rad": loops.velocity.kp,
            "ti_s": loops.velocity.ti,
            "setpoint_weight": loops.velocity.setpoint_weight,
            "filter_s": loops.velocity.filter,
        },
        "position": {"kv_per_s": loops.position.kv},
        "feedforward": {"velocity": loops.feedforward.velocity, "torque": loops.feedforward.torque},
        "filters": [
            {
                "kind": one.kind,
                "frequency_rad_per_s": one.frequency,
                **({} if one.width is None else {"width_rad_per_s": one.width}),
                **({} if one.depth is None else {"depth": one.depth}),
            }
            for one in loops.filters
        ],
        "move_jerk": None if loops.move_jerk is None else list(loops.move_jerk),
    }


def _tuned(study: Study) -> dict[str, Any]:
    if study.tuned is None:
        return {}
    tuned = study.tuned
    return {
        "margins": _margins(tuned.result),
        "time_to_window_s": _finite(tuned.result.worst_time),
        "failing_corners": _failing(tuned.result),
        "textbook": {
            "loops": _settings(tuned.textbook.loops),
            "margins": _margins(tuned.textbook),
            "time_to_window_s": _finite(tuned.textbook.worst_time),
            "failing_corners": _failing(tuned.textbook),
            "verdict": tuned.textbook.settled.verdict,
        },
        "bound": {"time_to_window_s": _finite(tuned.bound)},
        "machine_bound": {"time_to_window_s": _finite(tuned.machine_bound)},
        "path": [
            {
                "step": step.name,
                "time_to_window_s": _finite(step.worst_time),
                "failing_corners": step.failing_corners,
                "margins_hold": step.margins_hold,
            }
            for step in tuned.path
        ],
        "runs": tuned.runs,
        "reason": tuned.reason,
    }


def _failing(reference: Reference) -> int:
    return max((move.failing_corners for move in reference.settled.moves), default=0)


def _margins(reference: Reference) -> dict[str, Any]:
    found: Margins = reference.margins
    return {
        "stable": found.stable,
        "gain_margin_up_dB": _finite(found.gain_margin_up_dB),
        "gain_margin_down_dB": _finite(found.gain_margin_down_dB),
        "phase_margin_deg": _finite(found.phase_margin_deg),
        "peak_sensitivity": _finite(found.peak_sensitivity),
        "worst_corner": dict(reference.margins_corner),
    }


def _moves(study: Study) -> dict[str, Any]:
    if study.settled is None:
        return {}
    ending = "rad" if study.axis.stated.rotary else "m"
    return {
        "moves": [_move(move, ending) for move in study.settled.moves],
        "corners": study.settled.corners,
        "cycle_repeated": study.settled.repeated,
    }


def _move(move: MoveVerdict, ending: str) -> dict[str, Any]:
    return {
        "number": move.number,
        "verdict": move.verdict,
        "failing_corners": move.failing_corners,
        "commanded_end_s": _finite(move.nominal.commanded_end),
        "nominal": _outcome(move.nominal, ending),
        "worst": {"corner": dict(move.worst_corner), **_outcome(move.worst, ending)},
    }


def _outcome(outcome: MoveOutcome, ending: str) -> dict[str, Any]:
    figures = {
        "observed_s": outcome.observed,
        "time_to_window_s": outcome.time_to_window,
        "in_position_signal_s": outcome.signal,
        "last_in_position_signal_s": outcome.signal_last,
        "in_position_signal_losses": outcome.signal_losses,
        f"overshoot_{ending}": outcome.overshoot,
        f"undershoot_{ending}": outcome.undershoot,
        f"rest_error_{ending}": outcome.rest_error,
        f"peak_following_error_{ending}": outcome.following_error,
        "peak_torque_Nm": outcome.peak_torque,
        "peak_current_Arms": outcome.peak_current / math.sqrt(2.0),
        "peak_speed_rad_per_s": outcome.peak_speed,
        "current_saturated_s": outcome.current_saturated,
        "voltage_saturated_s": outcome.voltage_saturated,
        "current_time_level": outcome.bucket_peak,
        "tripped": outcome.tripped,
    }
    return {key: _finite(value) for key, value in figures.items()}


def _finite(value: Any) -> Any:
    """The value, or None where it is no finite number: JSON has neither infinity nor NaN."""
    return None if isinstance(value, float) and not math.isfinite(value) else value
