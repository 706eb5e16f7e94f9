"""Printers of traced equations: spreadsheet formula, one line of text, typeset HTML.

A spreadsheet reads ``-x^2`` as ``(-x)^2`` and ``2^3^2`` as 64, so every negation, every negative number,
every base of a power that is no atom, and every right operand of equal precedence is bracketed.  Blank cells
of a range are readings left out: ``AVERAGE``, ``SUM`` and ``COUNT`` pass over them, arithmetic on a range
asks for them with ``ISNUMBER``.
"""

from __future__ import annotations

from collections.abc import Callable
from html import escape

from reporter.functions import LIFT, SAME
from reporter.trace import Call, Name, Negation, Number, Operation, Term, has_series

_PRECEDENCE = {"+": 1, "-": 1, "*": 2, "/": 2, "^": 3}
_ATOM = 9
#: A spreadsheet function takes at most 255 arguments.
_MOST_ARGUMENTS = 200
NameOf = Callable[[Name], str]

_SHEET_FUNCTIONS = {
    "count": "COUNT", "mean": "AVERAGE", "total": "SUM", "dot": "SUMPRODUCT", "absolute": "ABS",
    "exp": "EXP", "ln": "LN", "log10": "LOG10", "lower": "MIN", "higher": "MAX",
}  # fmt: skip
_ELEMENTWISE = frozenset({"absolute", "exp", "ln", "log10"})
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
    """The spreadsheet formula of a tree, without its leading ``=``.

    Raises
    ------
    TypeError
        A function of the tree cannot be written for a range of cells.
    """
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
            a, b, rank = _operands(operator, _sheet(left, name_of), _sheet(right, name_of))
            return f"{a}^{b}" if operator == "^" else f"{a} {operator} {b}", rank
        case Call(function=function, arguments=arguments):
            return _sheet_call(function, arguments, name_of), _ATOM
    raise TypeError(f"no such node: {type(term).__name__}")


def _operands(operator: str, left: tuple[str, int], right: tuple[str, int]) -> tuple[str, str, int]:
    """Both operands, bracketed where the operator needs it, and the rank of the whole."""
    rank = _PRECEDENCE[operator]
    left_floor = _ATOM if operator == "^" else rank
    a = left[0] if left[1] >= left_floor else f"({left[0]})"
    b = right[0] if right[1] > rank else f"({right[0]})"
    return a, b, rank


def _sheet_call(function: str, arguments: tuple[Term, ...], name_of: NameOf) -> str:
    if any(map(has_series, arguments)):
        return _sheet_call_on_range(function, arguments, name_of)
    ranked = [_sheet(argument, name_of) for argument in arguments]
    texts = [text for text, _ in ranked]
    atoms = [text if rank == _ATOM else f"({text})" for text, rank in ranked]
    if function in _COMPARISONS:
        return f"IF({_comparison(function, *ranked)},1,0)"
    if function in {"all_of", "any_of"}:
        joiner = "AND" if function == "all_of" else "OR"
        return f"IF({_grouped(joiner, [f'{text}=1' for text in atoms])},1,0)"
    if function == "choose":
        return f"IF({texts[0]}>=0.5,{texts[1]},{texts[2]})"
    if function in {"half_up", "half_even", "truncated"}:
        return _sheet_rounding(function, *atoms)
    if function == "significant_decimals":
        lifted = f"ABS({texts[0]})*{_lifted()}"
        return f"({atoms[1]}-1-INT(LOG10({lifted})))"
    if function == "mean" and len(arguments) > _MOST_ARGUMENTS:
        return f"({_grouped('SUM', texts)}/{len(texts)})"
    return _grouped(_SHEET_FUNCTIONS[function], texts)


def _comparison(function: str, left: tuple[str, int], right: tuple[str, int]) -> str:
    """The condition of an indicator: the difference against the share `SAME` of the bound."""
    if right[0] == "0":
        return f"{left[0]}{_COMPARISONS[function]}0"
    a, b, _ = _operands("-", left, right)
    sign = "" if function == "at_most" else "-"
    return f"{a} - {b}{_COMPARISONS[function]}{sign}{number_text(SAME)}*ABS({right[0]})"


def _lifted() -> str:
    return f"(1+{number_text(LIFT)})"


def _sheet_rounding(rule: str, value: str, places: str) -> str:
    up = f"ROUND({value}*{_lifted()},{places})"
    if rule == "half_up":
        return up
    if rule == "truncated":
        return f"ROUNDDOWN({value}*{_lifted()},{places})"
    scaled = f"ABS({value})*10^{places}"
    is_half_above_even = f"ABS({scaled}-2*INT({scaled}/2)-0.5)<={number_text(LIFT)}*{scaled}"
    return f"IF({is_half_above_even},ROUNDDOWN({value},{places}),{up})"


def _grouped(function: str, texts: list[str]) -> str:
    """A call, nested where it has more arguments than a spreadsheet takes."""
    while len(texts) > _MOST_ARGUMENTS:
        groups = range(0, len(texts), _MOST_ARGUMENTS)
        texts = [f"{function}({','.join(texts[i : i + _MOST_ARGUMENTS])})" for i in groups]
    return f"{function}({','.join(texts)})"


def _sheet_call_on_range(function: str, arguments: tuple[Term, ...], name_of: NameOf) -> str:
    """A call with a range of cells among its arguments; only what works without array entry is written."""
    ranked = [_sheet(argument, name_of) for argument in arguments]
    first = arguments[0]
    if function in _COMPARISONS:
        return f"(({_comparison(function, *ranked)})*1)"
    if function in _ELEMENTWISE:
        return f"{_SHEET_FUNCTIONS[function]}({ranked[0][0]})"
    if function == "dot":
        return f"SUMPRODUCT({ranked[0][0]},{ranked[1][0]})"
    if len(arguments) == 1 and isinstance(first, Name):
        if function in {"all_of", "any_of"}:
            return f"IF({'MIN' if function == 'all_of' else 'MAX'}({ranked[0][0]})=1,1,0)"
        if function in _SHEET_FUNCTIONS:
            return f"{_SHEET_FUNCTIONS[function]}({ranked[0][0]})"
    if len(arguments) == 1 and function in {"mean", "total", "all_of", "any_of"}:
        cells = name_of(_first_series(first))
        summed = f"SUMPRODUCT(ISNUMBER({cells})*({ranked[0][0]}))"
        return {
            "mean": f"({summed}/COUNT({cells}))",
            "total": summed,
            "all_of": f"IF({summed}=COUNT({cells}),1,0)",
            "any_of": f"IF({summed}>0,1,0)",
        }[function]
    raise TypeError(f"{function} cannot be written for a range of cells")


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
            return _constant_text(value), _number_rank(value)
        case Negation(operand=operand):
            inner, rank = _text(operand, name_of)
            return f"−{inner if rank >= 2 else f'({inner})'}", 0
        case Operation(operator=operator, left=left, right=right):
            if operator == "^" and _is_half(right):
                return f"{_operands('^', _text(left, name_of), ('', _ATOM))[0]}^(1/2)", 3
            a, b, rank = _operands(operator, _text(left, name_of), _text(right, name_of))
            shown = {"*": "·", "-": "−"}.get(operator, operator)
            return f"{a}^{b}" if operator == "^" else f"{a} {shown} {b}", rank
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


def _is_half(term: Term) -> bool:
    return isinstance(term, Number) and term.value == 0.5


def _number_rank(value: float) -> int:
    """A negative number is bracketed everywhere, one with a power of ten as the base of a power."""
    return 0 if value < 0 else 3 if "E" in number_text(value) else _ATOM


def _constant_text(value: float) -> str:
    text = number_text(value)
    if "E" in text:
        mantissa, exponent = text.split("E")
        return f"{mantissa}×10^{int(exponent)}"
    return text.replace("-", "−")


def symbol_html(symbol: str) -> str:
    """A symbol such as ``C_d`` or ``%O2_w`` with its subscript set; digits after a letter are lowered."""
    head, _, tail = symbol.partition("_")
    text = f"<i>{_formula_digits(head)}</i>" if head[:1].isalpha() and len(head) <= 2 else _formula_digits(head)
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
            return _number_html(value), _number_rank(value)
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
            power = "1/2" if _is_half(right) else _html(right, name_of)[0]
            return f"{base}<sup>{power}</sup>", 3
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
