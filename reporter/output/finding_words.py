"""Findings in words: those of several runs once, with the numbers of the runs as ranges where only these differ."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence

from reporter.outcome import Finding
from reporter.output.phrases import Phrases

_NUMBER = re.compile(r"\d+(?:\.\d+)?")


def finding_words(findings: Iterable[Finding], phrases: Phrases) -> list[tuple[tuple[str, ...], str]]:
    """Each finding once: the keys of its runs (none where it is of all of them) and its words.

    Parameters
    ----------
    findings
        In the order found.
    phrases
        The wording, a firm's own perhaps, of the findings that name a phrase.
    """
    groups: dict[tuple[object, ...], list[Finding]] = {}
    for finding in findings:
        shape = [_NUMBER.sub("#", text) for _, text in finding.values]
        like = (finding.phrase, *shape) if finding.phrase else (finding.words,)
        groups.setdefault((*like, bool(finding.run)), []).append(finding)
    return [(tuple(f.run for f in alike if f.run), _words(alike, phrases)) for alike in groups.values()]


def _words(alike: Sequence[Finding], phrases: Phrases) -> str:
    first = alike[0]
    if not first.phrase:
        return first.words
    texts = {name: [dict(finding.values)[name] for finding in alike] for name, _ in first.values}
    return phrases(first.phrase, **{name: _ranges(several) for name, several in texts.items()})


def _ranges(texts: Sequence[str]) -> str:
    """Texts that differ in their numbers alone as one text, each number as a range."""
    places = iter(zip(*(_NUMBER.findall(text) for text in texts), strict=True))
    return _NUMBER.sub(lambda _: _range(next(places)), texts[0])


def _range(numbers: Sequence[str]) -> str:
    ends = dict.fromkeys((min(numbers, key=float), max(numbers, key=float)))
    return " to ".join(ends)
