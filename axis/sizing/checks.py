"""All checks of an axis, each judged at the worst of its corners."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from axis.completion import CompletedAxis
from axis.sizing.drive_checks import DRIVE_RULES
from axis.sizing.finding import Corner, Finding, Rule
from axis.sizing.motor_checks import MOTOR_RULES
from axis.sizing.remedy import Trials, remedy
from axis.sizing.transmission_checks import stage_rules
from axis.verdicts import Check


def rules(axis: CompletedAxis) -> tuple[Rule, ...]:
    """The checks that belong to this axis."""
    stages = [rule for n, stage in enumerate(axis.stated.transmission) for rule in stage_rules(n, stage.kind)]
    return (*MOTOR_RULES, *DRIVE_RULES, *stages)


def judge(rule: Rule, corners: Sequence[Corner], trials: Trials) -> Check:
    """One check at its worst corner, with its remedy where it fails."""
    findings = [rule.measure(corner) for corner in corners]
    check = Check(rule.id, rule.name, "not applicable", rule.source, unit=rule.unit)
    lacking = next((finding.missing for finding in findings if finding.missing), "")
    if lacking:
        verb = "are" if " and " in lacking else "is"
        return replace(check, verdict="not evaluated", reason=f"{lacking} {verb} not stated")
    margins = [finding.margin for finding in findings]
    judged = [(margin, n) for n, margin in enumerate(margins) if margin is not None]
    if not judged:
        return replace(check, demand=findings[0].demand, reason=findings[0].neutral)
    margin, n = min(judged)
    finding, corner = findings[n], corners[n]
    check = replace(
        check,
        verdict="pass" if finding.holds else "fail",
        demand=finding.demand,
        limit=finding.limit,
        margin=margin,
        reason=_reason(finding, corner),
    )
    if finding.holds:
        return check
    exceeding = {move for one in findings if not one.holds for move in one.moves}
    return replace(
        check, remedy=remedy(rule, corner, replace(finding, moves=tuple(sorted(exceeding))), corners, trials)
    )


def _reason(finding: Finding, corner: Corner) -> str:
    """What decides: the moves, the instant, the corner."""
    parts = []
    if finding.moves:
        numbers = ", ".join(str(move + 1) for move in finding.moves)
        parts.append(f"in move {numbers}" if len(finding.moves) == 1 else f"in moves {numbers}")
    if finding.reason:
        parts.append(finding.reason)
    parts.append(f"worst with {_shares_in_words(corner.shares)}" if corner.shares else "worst at the nominal values")
    return "; ".join(parts)


def _shares_in_words(shares: Mapping[str, float]) -> str:
    """A corner as a sentence names it: "load mass +5 %, friction −40 %"."""
    return ", ".join(f"{name.replace('_', ' ')} {share * 100.0:+.4g} %" for name, share in shares.items())
