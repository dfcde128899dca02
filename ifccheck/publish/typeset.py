"""Formulas as an engineer writes them: variables slanted, indices lowered, Greek letters."""

from __future__ import annotations

import re
from functools import lru_cache
from html import escape

from ifccheck.publish.words import plain

GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "eps": "ε",
    "zeta": "ζ", "eta": "η", "theta": "θ", "kappa": "κ", "lambda": "λ", "lam": "λ", "mu": "μ",
    "nu": "ν", "xi": "ξ", "rho": "ρ", "sigma": "σ", "tau": "τ", "phi": "φ", "chi": "χ",
    "psi": "ψ", "omega": "ω", "Delta": "Δ", "Sigma": "Σ", "Phi": "Φ", "Omega": "Ω",
}  # fmt: skip
FUNCTIONS = {
    "sqrt": "√", "min": "min", "max": "max", "abs": "abs", "tan": "tan", "sin": "sin",
    "cos": "cos", "cot": "cot", "atan": "atan", "radians": "rad", "where": "where", "if": "if",
    "else": "else", "and": "and", "or": "or", "not": "not",
}  # fmt: skip
LONGEST_SYMBOL = 5
SIGNS = {"*": "·", "-": "−", ">=": "≥", "<=": "≤", "==": "=", "!=": "≠"}

_TOKEN = re.compile(
    r"(?P<power>\*\*\s*(?P<exponent>[0-9.]+))|(?P<name>[A-Za-z]\w*'?\w*)"
    r"|(?P<digits>[0-9.]+)e(?P<decade>[+-]?[0-9]+)"
    r"|(?P<sign>>=|<=|==|!=|\*|-)|(?P<other>[0-9.]+|.)"
)


@lru_cache(maxsize=4096)
def formula_html(text: str) -> str:
    """Return a formula in the notation of a program, or any short text, as safe HTML."""
    return "".join(_token_html(found) for found in _TOKEN.finditer(plain(text)))


@lru_cache(maxsize=1024)
def numbers_html(text: str) -> str:
    """Return a formula with its numbers put in as safe HTML; words in it are units."""
    return "".join(_figure_html(found) for found in _TOKEN.finditer(plain(text)))


def _figure_html(found: re.Match[str]) -> str:
    if name := found["name"]:
        return FUNCTIONS.get(name) or escape(name)
    return _token_html(found)


def _token_html(found: re.Match[str]) -> str:
    if exponent := found["exponent"]:
        return f"<sup>{exponent}</sup>"
    if name := found["name"]:
        return FUNCTIONS.get(name) or _name_html(name)
    if decade := found["decade"]:
        power = str(int(decade)).replace("-", "−")
        return f"{found['digits']}·10<sup>{power}</sup>"
    if sign := found["sign"]:
        return escape(SIGNS[sign])
    return escape(found["other"])


def _name_html(name: str) -> str:
    """One symbol: ``phi_c``, ``Vc``, ``Av_min``, ``f'c``, ``eps_x``, ``b``."""
    base, *indices = [part for part in name.split("_") if part]
    if base not in GREEK and len(base) > 1:
        base, index = _split(base)
        indices = [index, *indices] if index else indices
    lowered = ",".join(map(_letter, indices))
    return f"<i>{_letter(base)}</i>{f'<sub>{lowered}</sub>' if lowered else ''}"


def _split(name: str) -> tuple[str, str]:
    """``Vc`` is V with the index c, ``f'c`` f' with c; ``alpha1`` alpha with 1; words stay."""
    for greek in sorted(GREEK, key=len, reverse=True):
        if name.startswith(greek):
            return greek, name[len(greek) :]
    if len(name) > LONGEST_SYMBOL:
        return name, ""
    cut = 2 if name[1] == "'" else 1
    return name[:cut], name[cut:]


def _letter(text: str) -> str:
    return GREEK.get(text) or escape(text.replace("'", "′"))
