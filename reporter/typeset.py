"""Printers of traced equations: spreadsheet formula, one line of text, typeset HTML.

A spreadsheet reads ``-x^2`` as ``(-x)^2`` and ``2^3^2`` as 64, so every negation, every negative number,
every base of a power that is no atom, and every right operand of equal precedence is bracketed.
"""

from __future__ import annotations

from collections.abc import Callable
from html import escape

from reporter.trace import Call, Name, Negation, Number, Operation, Term, has_series

_PRECEDENCE = {"+": 1, "-": 1, "*": 2, "/": 2, "^": 3}
_ATOM = 9
NameOf = Callable[[Name], str]

_SHEET_FUNCTIONS = {
    "mean": "AVERAGE", "total": "SUM", "dot": "SUMPRODUCT", "absolute": "ABS", "exp": "EXP", "ln": "LN",
    "log10": "LOG10", "lower": "MIN", "higher": "MAX", "half_up": "ROUND", "truncated": "ROUNDDOWN",
}  # fmt: skip
_WORDS = {
    "lower": "lower of",
    "higher": "higher of",
    "total": "sum",
    "half_up": "round",
    "half_even": "round",
}
_COMPARISONS = {"at_most": "<=", "at_least": ">=", "less_than": "<"}


def number_text(value: float) -> str:
    """A number so that a spreadsheet reads back the same double."""
    return repr(int(value)) if value == int(value) and abs(value) < 1e15 else repr(value).upper()


def sheet_formula(term: Term, name_of: NameOf = lambda name: name.key) -> str:
    """The spreadsheet formula of a tree, without its leading ``=``."""
    return _sheet(term, name_of)[0]


def _sheet(term: Term, name_of: NameOf) -> tuple[str, int]:
    match term:
        case Name():
            return name_of(term), _ATOM
        case Number(value=value):
            text = number_text(value)
            return (f"({text})", _ATOM) if value < 0 else (text, _ATOM)
        case Negation(operand=operand):
            inner, rank = _sheet(operand, name_of)
            return f"(-{inner if rank == _ATOM else f'({inner})'})", _ATOM
        case Operation(operator=operator, left=left, right=right):
            return _bracketed(operator, _sheet(left, name_of), _sheet(right, name_of), " ")
        case Call(function=function, arguments=arguments):
            return _sheet_call(function, arguments, name_of), _ATOM
    raise TypeError(f"no such node: {type(term).__name__}")


def _bracketed(operator: str, left: tuple[str, int], right: tuple[str, int], space: str) -> tuple[str, int]:
    rank = _PRECEDENCE[operator]
    left_floor = _ATOM if operator == "^" else rank
    a = left[0] if left[1] >= left_floor else f"({left[0]})"
    b = right[0] if right[1] > rank else f"({right[0]})"
    gap = "" if operator == "^" else space
    return f"{a}{gap}{operator}{gap}{b}", rank


def _sheet_call(function: str, arguments: tuple[Term, ...], name_of: NameOf) -> str:
    texts = [_sheet(argument, name_of)[0] for argument in arguments]
    if function in _COMPARISONS:
        return f"IF({texts[0]}{_COMPARISONS[function]}{texts[1]},1,0)"
    if function in {"all_of", "any_of"}:
        joiner = "AND" if function == "all_of" else "OR"
        return f"IF({joiner}({','.join(f'{text}=1' for text in texts)}),1,0)"
    if function == "choose":
        return f"IF({texts[0]}>=0.5,{texts[1]},{texts[2]})"
    if function == "half_even":
        value, places = texts
        odd = f"MOD(ABS({value})*10^({places}),2)=0.5"
        return f"IF({odd},ROUNDDOWN({value},{places}),ROUND({value},{places}))"
    if function == "significant_decimals":
        return f"({texts[1]}-1-INT(LOG10(ABS({texts[0]}))))"
    if function in {"mean", "total"} and len(arguments) == 1 and not isinstance(arguments[0], Name):
        if has_series(arguments[0]):
            count = f"/COUNT({name_of(_first_series(arguments[0]))})" if function == "mean" else ""
            return f"(SUMPRODUCT({texts[0]}){count})"
    return f"{_SHEET_FUNCTIONS[function]}({','.join(texts)})"


def _first_series(term: Term) -> Name:
    match term:
        case Name(series=True):
            return term
        case Operation(left=left, right=right):
            return _first_series(left if has_series(left) else right)
        case Negation(operand=operand):
            return _first_series(operand)
        case Call(arguments=arguments):
            return next(_first_series(argument) for argument in arguments if has_series(argument))
    raise TypeError("no series in this tree")


def text_formula(term: Term, name_of: NameOf = lambda name: name.symbol) -> str:
    """The equation in one line of plain text, in symbols or with the numbers in, as `name_of` gives them."""
    return _text(term, name_of)[0]


def _text(term: Term, name_of: NameOf) -> tuple[str, int]:
    match term:
        case Name():
            text = name_of(term)
            return text, _ATOM if not text.startswith(("-", "−")) else 0
        case Number(value=value):
            return _constant_text(value), _ATOM if value >= 0 else 0
        case Negation(operand=operand):
            inner, rank = _text(operand, name_of)
            return f"−{inner if rank >= 2 else f'({inner})'}", 0
        case Operation(operator=operator, left=left, right=right):
            shown = {"*": "·", "-": "−"}.get(operator, operator)
            text, rank = _bracketed(operator, _text(left, name_of), _text(right, name_of), " ")
            if shown != operator:
                a, b = _text(left, name_of), _text(right, name_of)
                left_text = a[0] if a[1] >= rank else f"({a[0]})"
                right_text = b[0] if b[1] > rank else f"({b[0]})"
                text = f"{left_text} {shown} {right_text}"
            return text, rank
        case Call(function=function, arguments=arguments):
            inner_texts = [_text(argument, name_of)[0] for argument in arguments]
            if function in _COMPARISONS:
                shown = {"<=": "≤", ">=": "≥"}.get(_COMPARISONS[function], "<")
                return f"{inner_texts[0]} {shown} {inner_texts[1]}", 0
            if function == "absolute":
                return f"|{inner_texts[0]}|", _ATOM
            if function == "dot":
                return f"sum({inner_texts[0]} · {inner_texts[1]})", _ATOM
            word = _WORDS.get(function, function.replace("_", " "))
            return f"{word}({', '.join(inner_texts)})", _ATOM
    raise TypeError(f"no such node: {type(term).__name__}")


def _constant_text(value: float) -> str:
    text = number_text(value)
    if "E" in text:
        mantissa, exponent = text.split("E")
        return f"{mantissa}×10^{int(exponent)}"
    return text.replace("-", "−")


def symbol_html(symbol: str) -> str:
    """A symbol such as ``C_d`` or ``%O2_w`` with its subscript set; digits after a letter are lowered."""
    head, _, tail = symbol.partition("_")
    text = (
        f"<i>{_formula_digits(head)}</i>" if head[:1].isalpha() and len(head) <= 2 else _formula_digits(head)
    )
    return f"{text}<sub>{_formula_digits(tail)}</sub>" if tail else text


def _formula_digits(text: str) -> str:
    out: list[str] = []
    previous = ""
    for char in text:
        lowered = char.isdigit() and previous.isalpha()
        out.append(f"<sub>{char}</sub>" if lowered else escape(char))
        previous = char
    return "".join(out)


def html_formula(term: Term, name_of: NameOf = lambda name: symbol_html(name.symbol)) -> str:
    """The equation as HTML: fractions as stacked spans, powers raised."""
    return _html(term, name_of)[0]


def _html(term: Term, name_of: NameOf) -> tuple[str, int]:
    match term:
        case Name():
            text = name_of(term)
            return text, _ATOM if not text.startswith(("-", "−")) else 0
        case Number(value=value):
            return _number_html(value), _ATOM if value >= 0 else 0
        case Negation(operand=operand):
            inner, rank = _html(operand, name_of)
            return f"−{inner if rank >= 2 else _parens(inner)}", 0
        case Operation(operator="/", left=left, right=right):
            top, bottom = _html(left, name_of)[0], _html(right, name_of)[0]
            return (
                f'<span class="frac"><span class="num">{top}</span><span class="den">{bottom}</span></span>',
                8,
            )
        case Operation(operator="^", left=left, right=right):
            base, rank = _html(left, name_of)
            base = base if rank == _ATOM else _parens(base)
            return f"{base}<sup>{text_formula(right)}</sup>", 3
        case Operation(operator=operator, left=left, right=right):
            rank = _PRECEDENCE[operator]
            a, b = _html(left, name_of), _html(right, name_of)
            left_text = a[0] if a[1] >= rank else _parens(a[0])
            right_text = b[0] if b[1] > rank or (operator in "+*" and b[1] == rank) else _parens(b[0])
            sign = {"*": "\u00a0·\u00a0", "-": " − ", "+": " + "}[operator]
            return f"{left_text}{sign}{right_text}", rank
        case Call(function=function, arguments=arguments):
            return _html_call(function, [_html(argument, name_of)[0] for argument in arguments])
    raise TypeError(f"no such node: {type(term).__name__}")


def _html_call(function: str, texts: list[str]) -> tuple[str, int]:
    if function in _COMPARISONS:
        shown = {"<=": "≤", ">=": "≥"}.get(_COMPARISONS[function], "&lt;")
        return f"{texts[0]} {shown} {texts[1]}", 0
    if function == "absolute":
        return f"|{texts[0]}|", _ATOM
    if function == "dot":
        return f"Σ({texts[0]}\u00a0·\u00a0{texts[1]})", _ATOM
    word = _WORDS.get(function, function.replace("_", " "))
    return f'<span class="fn">{word}</span>({", ".join(texts)})', _ATOM


def _parens(text: str) -> str:
    return f'<span class="par">(</span>{text}<span class="par">)</span>'


def _number_html(value: float) -> str:
    text = number_text(value)
    if "E" in text:
        mantissa, exponent = text.split("E")
        return f"{mantissa}\u00a0×\u00a010<sup>{str(int(exponent)).replace('-', '−')}</sup>"
    return text.replace("-", "−")
