"""The verdict on one sample, in words: what is fact, what is likely, what to look at next."""

from __future__ import annotations

from gibbsmin.sample.evidence import Evidence, celsius, facts, listed, ppm, probability, standing
from gibbsmin.sample.findings import (
    Judgement,
    ReactionFinding,
    Side,
    Stream,
    Verdict,
)

_THERMOCOUPLE = "The thermocouple: its reading, and where it sits against the sampling point."
_SAMPLE_LINE = "The sample line: how hot it is, and what its walls may catalyse."
_ACTIVITY = "Catalyst activity: the trend of the approach over weeks."
_BYPASS = "Bypass: leaking valves and exchangers, channelling."
_CANDIDATES = "The candidates: whether a species or a reaction was left out."
_FEED = "The feed: whether its composition and flows are what the case says."
_ANALYSER = "The analyser, against its calibration gas; then another sample."
_METERS = "The feed meters, against each other and against the day's totals."


def verdict_of(evidence: Evidence) -> Judgement:
    """Judge a sample from what was found."""
    if not evidence.closes:
        return _not_credible(evidence)
    off = [r for r in evidence.reactions if r.side in (Side.SHORT, Side.BEYOND)]
    if evidence.fits or not off:
        return _at(evidence) if evidence.fits and _all_known(evidence) else _open(evidence)
    main = max(off, key=_significance)
    return _short(evidence, main) if main.side is Side.SHORT else _beyond(evidence, main)


def _all_known(evidence: Evidence) -> bool:
    sides = [reaction.side for reaction in evidence.reactions]
    return bool(sides) and Side.UNKNOWN not in sides


def _significance(reaction: ReactionFinding) -> float:
    """|z| of ln(Q/K); a reaction known by a limit alone comes after those with figures."""
    ratio = reaction.log_ratio
    known = not reaction.faint and ratio.uncertainty > 0.0
    return abs(ratio.value) / ratio.uncertainty if known else 0.0


def _not_credible(evidence: Evidence) -> Judgement:
    suspects = evidence.suspects
    likely: tuple[str, ...] = ()
    suspected = listed(suspects.names, "or")
    if suspects.single:
        way = "high" if suspects.size > 0.0 else "low"
        likely = (
            f"If one measurement is wrong, it is likely {suspected}, which reads {way} by about "
            f"{_error(evidence)}.",
        )
    elif suspects.names:
        likely = (
            f"If one measurement is wrong, it is likely one of {suspected}; "
            "the sample does not tell them apart.",
        )
    return _judgement(
        evidence,
        Verdict.NOT_CREDIBLE,
        f"Sample not credible; the likeliest error is in {suspected}.",
        likely,
        (*([_METERS] if _suspects_flow(evidence) else [_ANALYSER]), _FEED),
    )


def _suspects_flow(evidence: Evidence) -> bool:
    places = {m.stream for m in evidence.measurements if m.name in evidence.suspects.names}
    return places == {Stream.FEED}


def _error(evidence: Evidence) -> str:
    size = abs(evidence.suspects.size)
    if _suspects_flow(evidence):
        return f"{100 * size:.2g} % of its nominal value"
    return f"{100 * size:.2g} points of a per cent" if size >= 1e-4 else ppm(size)


def _at(evidence: Evidence) -> Judgement:
    own = any(reaction.own_constant for reaction in evidence.reactions)
    p = probability(evidence.fit.at_measured.probability)
    ending = ", by the K of the case" if own else f" ({p})"
    return _judgement(
        evidence,
        Verdict.AT_EQUILIBRIUM,
        f"At equilibrium within errors at {celsius(evidence.temperature.value)}{ending}.",
        (),
        (),
    )


def _short(evidence: Evidence, main: ReactionFinding) -> Judgement:
    likely = ["The reaction had not the time, the catalyst or the mixing to come to its end."]
    look = [_ACTIVITY]
    beyond = [r for r in evidence.reactions if r.side is Side.BEYOND]
    if beyond:
        likely += [_froze(reaction) for reaction in beyond]
        look.append(_SAMPLE_LINE)
    else:
        likely.append("Unreacted feed that went around the catalyst would look the same.")
        look.append(_BYPASS)
    if evidence.thermocouple_may_err:
        likely.append(
            f"All reactions agree on {celsius(evidence.fit.temperature.value)}: a thermocouple "
            "that reads wrong would explain it as well."
        )
        look.append(_THERMOCOUPLE)
    headline = f"Short of equilibrium: {main.text}; {standing(evidence, main)}."
    return _judgement(evidence, Verdict.SHORT, headline, tuple(likely), tuple(look))


def _beyond(evidence: Evidence, main: ReactionFinding) -> Judgement:
    likely = [
        "A reaction does not pass its own equilibrium: a measurement, the feed or the list of "
        "candidates is wrong, or the gas was last at equilibrium somewhere else."
    ]
    look = [_THERMOCOUPLE]
    if evidence.fits_elsewhere:
        likely.append(
            f"All reactions agree on {celsius(evidence.fit.temperature.value)}: the gas may have "
            "frozen at a place of that temperature, or the thermocouple reads wrong."
        )
        look.append(_ANALYSER)
    else:
        likely.append(_froze(main))
        short = [r.text for r in evidence.reactions if r.side is Side.SHORT]
        if short:
            likely.append(
                f"At the same time {listed(short, 'and')} fell short: bypassed feed may have mixed "
                "in, or one reaction may have driven the other."
            )
            look.append(_BYPASS)
        look += [_SAMPLE_LINE, _CANDIDATES]
    headline = f"Beyond equilibrium: {main.text}; {standing(evidence, main)}."
    return _judgement(evidence, Verdict.BEYOND, headline, tuple(likely), tuple(look))


def _open(evidence: Evidence) -> Judgement:
    unknown = [r for r in evidence.reactions if r.side is Side.UNKNOWN]
    if unknown:
        wanted = unknown[0].faint or tuple(unknown[0].coefficients)
        open_still = unknown[0].log_quotient.value != unknown[0].log_quotient.value
        return _judgement(
            evidence,
            Verdict.NOT_DECIDABLE,
            f"Not decidable: {unknown[0].text} is not known to "
            f"{evidence.thresholds.resolution:.0f} K.",
            (),
            (
                f"A {'' if open_still else 'more certain '}measurement of {listed(wanted, 'and')} "
                "would decide.",
            ),
        )
    if evidence.reactions and evidence.fit.certified:
        return _judgement(
            evidence,
            Verdict.NOT_DECIDABLE,
            "Not decidable: equilibrium does not fit, yet no reaction is off by itself.",
            ("Several small departures add up, or the feed is not what the case says.",),
            (_FEED,),
        )
    cause = (
        "the equilibrium could not be certified"
        if evidence.reactions
        else "no reaction runs between the records of the sample"
    )
    return _judgement(
        evidence,
        Verdict.NOT_DECIDABLE,
        f"Not decidable: {cause}.",
        (),
        ("Measurements of what the reaction in question makes and uses would decide.",),
    )


def _froze(reaction: ReactionFinding) -> str:
    """Where a reaction that is beyond equilibrium may have come to rest."""
    distance = reaction.approach.value
    if distance != distance:
        return f"{reaction.text} may have gone on past the thermocouple."
    if distance > 0.0:
        return (
            f"{reaction.text} stands as at a cooler place: it may have run on in the sample line."
        )
    return f"{reaction.text} stands as at a hotter place: it may have frozen there."


def _judgement(
    evidence: Evidence,
    verdict: Verdict,
    headline: str,
    likely: tuple[str, ...],
    look_at: tuple[str, ...],
) -> Judgement:
    names = evidence.suspects.names
    if names and verdict is not Verdict.NOT_CREDIBLE:
        p = probability(evidence.closure.probability)
        likely = (
            *likely,
            f"The closure is poor ({p}); if a measurement is wrong, it is likely "
            f"{listed(names, 'or')}.",
        )
    return Judgement(verdict, headline, tuple(facts(evidence)), likely, look_at)
