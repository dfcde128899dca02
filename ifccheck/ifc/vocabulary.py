"""Words of the trade by which models name materials and uses, in several languages.

Phrases are looked for from the longest on, and what one phrase took no other may take:
"Stahlbeton" is concrete, "Betonstahl" is reinforcing steel.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from functools import lru_cache

CONCRETE = "concrete"
REBAR = "reinforcing steel"
STEEL = "steel"
NOTHING = ""
"""Phrases that name a material but do not tell what the member is made of."""

STEMS: Mapping[str, tuple[str, ...]] = {
    CONCRETE: (
        "reinforced concrete", "reinforced cement concrete", "steel fibre concrete",
        "fibre reinforced concrete", "fiber reinforced concrete", "concrete",
        "stahlbeton", "ortbeton", "spannbeton", "stahlfaserbeton", "leichtbeton", "beton",
        "gewapend beton", "prefabbeton", "staalvezelbeton",
        "armert betong", "plasstøpt", "betong", "betoni", "béton armé", "béton",
        "hormigón armado", "hormigon armado", "hormigón", "hormigon", "concreto",
        "calcestruzzo", "betão", "железобетон", "бетон", "żelbet",
    ),
    REBAR: (
        "reinforcing steel", "reinforcement steel", "reinforcing bar", "reinforcement bar",
        "rebar", "betonstahl", "bewehrungsstahl", "bewehrung", "betonstaal", "wapeningsstaal",
        "wapening", "armeringsstål", "armering", "acier d'armature", "acier pour béton",
        "acero de refuerzo", "acero corrugado", "feb500", "feb400",
    ),
    STEEL: (
        "structural steel", "steel", "baustahl", "stahl", "staal", "stalen", "stål", "acier",
        "acero", "acciaio", "aço", "teräs", "сталь",
    ),
    "timber": (
        "timber", "wooden", "plywood", "glulam", "holz", "hout", "trevirke", "treverk",
        "limtre", "madera", "legno", "madeira", "bois", "lamellé-collé", "multiplex",
        "betonplex", "betoplex", "larch", "spruce", "softwood", "hardwood",
    ),
    "masonry": (
        "masonry", "brickwork", "concrete block", "blockwork", "mauerwerk", "kalksandstein",
        "betonstein", "metselwerk", "kalkzandsteen", "baksteen", "betonsteen", "murverk",
        "maçonnerie", "mampostería", "albañilería",
    ),
    "aluminium": ("aluminium", "aluminum", "aluminio"),
    "insulation": (
        "insulation", "insulating", "isolatie", "isolering", "isolasjon", "dämmung",
        "dämmstoff", "isolation thermique", "aislamiento", "isol_hard", "isol_zacht",
        "isokorf", "isokorb", "mineral wool", "polystyrene", "styrofoam",
    ),
    "rubber": ("rubber", "elastomer", "neoprene", "gummi", "caoutchouc", "élastomère"),
    "plastic": ("plastic", "kunststoff", "kunststof", "plastique", "plástico"),
    "bearing": (
        "bearing pad", "elastomeric bearing", "pot bearing", "sliding bearing", "bridge bearing",
        "elastomerlager", "gleitlager", "topflager", "brückenlager", "auflager", "brulager",
        "opleggingsblok", "oplegblok", "oplegrubber", "appareil d'appui", "appareil d’appui",
        "apoyo elastomérico", "apoyo de neopreno",
    ),
    "anchor": (
        "anchor plate", "anchor bolt", "anchor rail", "lifting anchor", "cast-in channel",
        "ankerplatte", "ankerschiene", "transportanker", "ankerplaat", "hijsanker", "boutanker",
        "slotanker", "platine d'ancrage", "innstøpningsgods",
    ),
    "sleeve": (
        "pipe sleeve", "cast-in sleeve", "hüllrohr", "leerrohr", "mantelbuis", "fourreau",
    ),
    "pad": ("padstone", "bearing plate", "oplegplaat", "onderlegplaat", "lagerplatte"),
    "footing": (
        "footing", "pile cap", "pilecap", "streifenfundament", "einzelfundament",
        "köcherfundament", "fundamentplatte", "funderingsvoet", "funderingsstrook",
        "funderingspoer", "fundamentsåle", "såle", "zapata", "encepado",
    ),
    NOTHING: (
        "steel fibre", "steel fiber", "staalvezel", "stahlfaser", "on steel", "steel formwork",
        "load bearing", "load-bearing", "loadbearing", "bearing wall", "fundamentbalk",
        "fundamentbalken", "funderingsbalk", "foundation beam",
    ),
}  # fmt: skip
"""Parts of words and phrases, wherever they stand."""

USE_WORDS: Mapping[str, tuple[str, ...]] = {
    "bearing": ("bearing", "bearings", "lager", "oplegging", "appui", "apoyo"),
    "anchor": ("anchor", "anchors", "anker", "ankers", "ancrage", "anclaje"),
    "sleeve": ("sleeve", "sleeves", "sparing", "sparingen", "hülse", "manchon", "utsparing"),
    "pad": ("pad", "pads", "shim", "shims", "vulplaat"),
    "wall": ("wall", "walls", "wand", "wände", "muur", "vegg", "mur", "pared", "parete"),
    "footing": ("fundament", "fundamente", "fundering", "poer", "poeren", "semelle", "semelles",
                "sokkel"),
}  # fmt: skip
"""Whole words that tell what a member is for."""

MATERIAL_WORDS: Mapping[str, tuple[str, ...]] = {
    CONCRETE: ("rc", "rcc", "cast in situ", "cast-in-place"),
    STEEL: ("metal", "metall", "metaal", "métal"),
    "timber": ("wood", "tre", "lvl", "clt", "bsh", "kvh", "osb", "mdf", "pine", "oak", "d.fir-l",
               "vuren", "grenen", "lariks", "fichte", "lärche", "gran", "furu"),
    "masonry": ("brick", "bricks", "ziegel", "stone", "steen", "natuursteen"),
    "insulation": ("eps", "xps", "pir", "pur", "isol", "foam"),
    "plastic": ("pvc", "hdpe", "grp", "gfrp", "frp"),
}  # fmt: skip
"""Whole words that mean a material where a material is named; elsewhere they may be marks."""

BEAM_WORDS = re.compile(
    r"beam|girder|lintel|joist|balk|bjelke|drager|träger|traeger|unterzug|sturz|poutre|longrine"
    r"|linteau|viga|dintel",
    re.IGNORECASE,
)

MATERIAL_GRADES: Mapping[str, str] = {
    STEEL: r"s(?:235|275|355|420|450|460)[a-z0-9]{0,3}|st ?(?:37|52)(?:-\d)?|fe ?(?:360|430|510)"
    r"|a36|a992|a572|a500|a53|(?:300|350|380|400)wt?|8\.8|10\.9",
    REBAR: r"[bf]e?b? ?(?:400|420|450|500|550|600)[a-z]{0,3}",
    "timber": r"gl ?\d{2}[chk]?|c(?:14|16|18|22)(?!/)",
    CONCRETE: r"l?c ?\d{2,3}/\d{2,3}",
}
"""Grades that only one material has; looked for in the names of materials alone."""

STEEL_SECTIONS = re.compile(
    r"\b(?:he ?\d{2,4} ?[abm]{1,2}|he[abm] ?\d{2,4}|ipe ?[aor]? ?\d{2,4}|ipn ?\d{2,4}"
    r"|up[en] ?\d{2,4}|unp ?\d{2,4}|hss ?\d[\d./ -]*[x*×] ?\d[\d.x*×/ -]*"
    r"|[rsc]hs ?\d[\d.]* ?[x*×] ?\d[\d.x*× ]*"
    r"|ub ?\d{3} ?x ?\d+|uc ?\d{3} ?x ?\d+|\d{3}x\d{3}x\d{2,3} ?u[bcp])(?![a-z])",
    re.IGNORECASE,
)
LIKELY_STEEL_SECTIONS = re.compile(r"\bw ?\d{1,4} ?[x×] ?\d{2,3}(?![a-z])", re.IGNORECASE)
"""W12x26; where the material is concrete it may be a width and a depth."""

LIGHTWEIGHT = re.compile(
    r"\blc ?\d{2,3}/\d{2,3}|light ?-?weight|leichtbeton|lichtbeton|low[- ]density|lettbetong",
    re.IGNORECASE,
)
PRESTRESSED = re.compile(
    r"pre[-_ ]?stress|post[-_ ]?tension|pre[-_ ]?tension|spannbeton|vorgespannt|voorgespannen"
    r"|spennarmer|spennbetong|précontraint|precontraint|precompress|pretensad|postesad|postensad"
    r"|hollow[-_ ]?core",
    re.IGNORECASE,
)


def _alternatives(groups: Mapping[str, tuple[str, ...]]) -> list[tuple[str, str]]:
    """Phrases and their families, the longest first."""
    pairs = [(phrase, family) for family, phrases in groups.items() for phrase in phrases]
    return sorted(pairs, key=lambda pair: -len(pair[0]))


def _pattern(pairs: list[tuple[str, str]], whole_words: bool) -> re.Pattern[str]:
    body = "|".join(re.escape(phrase) for phrase, _ in pairs)
    return re.compile(rf"(?<!\w)(?:{body})(?!\w)" if whole_words else body)


NO_FAMILIES: frozenset[str] = frozenset()
WORD = re.compile(r"[^\W\d_]{3}")
"""Three letters in a row, which all phrases and uses have and most marks have not."""
_STEMS = _alternatives(STEMS)
_STEM_FAMILY = dict(_STEMS)
_STEM = _pattern(_STEMS, whole_words=False)
_USES = _alternatives(USE_WORDS)
_USE_FAMILY = dict(_USES)
_USE = _pattern(_USES, whole_words=True)
_MATERIALS = _alternatives(MATERIAL_WORDS)
_MATERIAL_FAMILY = dict(_MATERIALS)
_MATERIAL = _pattern(_MATERIALS, whole_words=True)
_GRADES = [
    (family, re.compile(rf"(?<![\w.])(?:{body})(?![\w.]*\d)", re.IGNORECASE))
    for family, body in MATERIAL_GRADES.items()
]


@lru_cache(maxsize=8192)
def speaks_of_prestress(name: str) -> bool:
    """Tell whether a name says that a member is prestressed."""
    return PRESTRESSED.search(name) is not None


@lru_cache(maxsize=8192)
def speaks_of_lightweight(name: str) -> bool:
    """Tell whether a name says that concrete is lightweight."""
    return LIGHTWEIGHT.search(name) is not None


@lru_cache(maxsize=8192)
def families_named(text: str) -> frozenset[str]:
    """Return the materials and uses that the name of a member or a type speaks of."""
    if WORD.search(text.casefold()) is None:
        return NO_FAMILIES
    families, rest = _split(text)
    return families | {_USE_FAMILY[word] for word in _USE.findall(rest)}


@lru_cache(maxsize=1024)
def families_of_material(text: str) -> frozenset[str]:
    """Return the materials and uses that a material's name speaks of, in words or by a grade."""
    _, rest = _split(text)
    worded = {_MATERIAL_FAMILY[word] for word in _MATERIAL.findall(rest)}
    graded = {family for family, pattern in _GRADES if pattern.search(text)}
    return families_named(text) | worded | graded


def _split(text: str) -> tuple[frozenset[str], str]:
    """The families of the phrases in a text, and what these leave of it."""
    folded = text.casefold()
    families = frozenset(_STEM_FAMILY[phrase] for phrase in _STEM.findall(folded)) - {NOTHING}
    return families, _STEM.sub(" \x00 ", folded).replace("_", " ")
