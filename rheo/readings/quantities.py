"""The quantities that a readings table can hold: units, allowed values, the words for them."""

from __future__ import annotations

from dataclasses import dataclass, field

from rheo.readings import solids


@dataclass(frozen=True)
class Quantity:
    """One quantity that a column can hold.

    Parameters
    ----------
    key : str
        Name in code, files and JSON; the attribute of ``Readings``.
    name : str
        The trade's words for it.
    unit : str
        SI unit in which the column is kept.
    default_unit : str
        The unit in which numbers without a unit are read.
    words : tuple of str
        Headings that mean it, without unit, in small letters and without accents.
    symbols : tuple of str
        Short headings that mean it when the unit agrees; capital letters count.
    word_units : dict of str to str
        Words that say the unit as well, such as ``rpm``.
    unit_words : dict of str to str
        Spellings of units of this quantity, in small letters, that the general table of
        units does not know or would read as something else.
    refused_units : dict of str to str
        Spellings that could be taken two ways, with what to write instead.
    percent : bool
        Whether it is a share, written in % as well.
    unit_needed : bool
        Whether its words mean it only beside its unit.
    below : float
        What every value must be below, in the SI unit.
    text : bool
        Whether the column holds words.
    """

    key: str
    name: str
    unit: str
    default_unit: str
    words: tuple[str, ...]
    symbols: tuple[str, ...] = ()
    word_units: dict[str, str] = field(default_factory=dict)
    unit_words: dict[str, str] = field(default_factory=dict)
    refused_units: dict[str, str] = field(default_factory=dict)
    percent: bool = False
    unit_needed: bool = False
    below: float = float("inf")
    text: bool = False


# Per minute is a rate of shear here, where the general table reads revolutions.
_PER_TIME = {
    **dict.fromkeys(("1/min", "min-1", "min^-1", "min⁻¹"), "1/minute"),
    **dict.fromkeys(("1/s", "s-1", "1/sek", "sek-1", "1/second", "reciprocal seconds"), "1/s"),
}
_TURNS = {
    **dict.fromkeys(
        ("u/min", "upm", "tr/min", "tpm", "1/minute", "r.p.m.", "rpm.", "umdr/min"),
        "revolution/minute",
    ),
    **dict.fromkeys(("hz", "u/s", "tr/s"), "revolution/second"),
}
_UNSURE_TURNS = dict.fromkeys(
    ("1/s", "s-1", "s^-1", "s⁻¹", "/s", "1/sec", "sec-1"), "rev/s or rad/s"
)
_NOT_A_RATE = dict.fromkeys(
    ("rpm", "r/min", "rev/min", "rps", "rev/s", "hz", "°/s", "deg/s", "rad/s", "cps"), "1/s"
)
_NEWTON_METRES = {
    "Nm": "N*m",
    "mNm": "mN*m",
    "µNm": "uN*m",
    "μNm": "uN*m",
    "uNm": "uN*m",
    "nNm": "nN*m",
    "Ncm": "N*cm",
    "g.cm": "gf*cm",
    "g cm": "gf*cm",
    "g·cm": "gf*cm",
    "gcm": "gf*cm",
    "dyn cm": "dyn*cm",
    "dyncm": "dyn*cm",
}
_PASCAL_SECONDS = {
    "pas": "Pa*s",
    "mpas": "mPa*s",
    "cps": "cP",
    "cp": "cP",
    "centipoises": "cP",
    "pa-s": "Pa*s",
    "mpa-s": "mPa*s",
}
_STRESSES = {
    "lb/100 ft²": "lb/100ft2",
    "lb/100ft²": "lb/100ft2",
    "lbf/100ft²": "lb/100ft2",
    "lbf/100 ft²": "lb/100ft2",
    "lbf/100 ft2": "lb/100ft2",
    "lb/100 sq ft": "lb/100ft2",
    "dyn/cm²": "dyn/cm**2",
    "dynes/cm2": "dyn/cm**2",
}
_PRESSURES = {
    "mmh2o": "millimeter_H2O",
    "mm h2o": "millimeter_H2O",
    "mmws": "millimeter_H2O",
    "mws": "meter_H2O",
    "m h2o": "meter_H2O",
}
_TIMES = {
    **dict.fromkeys(("hh:mm:ss", "h:mm:ss", "mm:ss", "sek", "sek.", "sec.", "seg"), "s"),
    "std": "h",
    "minuten": "min",
}
# In a heading a bare c or k is a temperature.
_DEGREES = {
    "f": "degF",
    **dict.fromkeys(("deg. c", "deg.c", "grad c", "grad"), "degC"),
}

QUANTITIES: tuple[Quantity, ...] = (
    Quantity(
        "rate",
        "shear rate",
        "1/s",
        "1/s",
        words=(
            *("rate", "shear rate", "shearrate", "rate of shear", "strain rate"),
            *("gamma dot", "gammadot", "shear strain rate"),
            *("scherrate", "schergeschwindigkeit", "schergefalle", "geschwindigkeitsgefalle"),
            *("vitesse de cisaillement", "taux de cisaillement", "gradient de vitesse"),
            *("velocidad de corte", "velocidad de cizalla", "velocidad de cizallamiento"),
            *("velocidad de deformacion", "tasa de corte", "gradiente de velocidad"),
        ),
        symbols=("γ", "D"),
        unit_words=_PER_TIME,
        refused_units=_NOT_A_RATE,
    ),
    Quantity(
        "stress",
        "shear stress",
        "Pa",
        "Pa",
        words=(
            *("stress", "shear stress", "shearstress", "wall shear stress", "wall stress"),
            *("tau", "τ", "schubspannung", "scherspannung", "contrainte de cisaillement"),
            *("contrainte", "cission", "esfuerzo cortante", "esfuerzo de corte", "esfuerzo"),
            *("tension de corte", "tension cortante", "tension de cizalla", "esfuerzo de cizalla"),
        ),
        unit_words=_STRESSES,
    ),
    Quantity(
        "viscosity",
        "viscosity",
        "Pa*s",
        "Pa*s",
        words=(
            *("viscosity", "visc", "dynamic viscosity", "shear viscosity", "eta", "η"),
            "apparent viscosity",
            *("viskositat", "scheinviskositat", "dynamische viskositat", "scherviskositat"),
            *("viscosite", "viscosite dynamique", "viscosidad", "viscosidad dinamica"),
        ),
        word_units={"cp": "cP", "cps": "cP", "mpas": "mPa*s"},
        unit_words=_PASCAL_SECONDS,
    ),
    Quantity(
        "angular_speed",
        "speed",
        "rad/s",
        "rpm",
        words=(
            *("speed", "rotational speed", "rotation speed", "spindle speed", "rotor speed"),
            *("bob speed", "cup speed", "revolutions", "drehzahl", "vitesse de rotation"),
            *("rotational velocity", "vitesse", "velocidad", "velocidad de giro"),
            "velocidad de rotacion",
        ),
        symbols=("n", "N"),
        word_units={
            "angular speed": "rad/s",
            "angular velocity": "rad/s",
            "omega": "rad/s",
            "ω": "rad/s",
            "winkelgeschwindigkeit": "rad/s",
            "vitesse angulaire": "rad/s",
            "velocidad angular": "rad/s",
            "rpm": "rpm",
            "upm": "rpm",
            "tr/min": "rpm",
            "tr min": "rpm",
            "u/min": "rpm",
        },
        unit_words=_TURNS,
        refused_units=_UNSURE_TURNS,
    ),
    Quantity(
        "torque",
        "torque",
        "N*m",
        "N*m",
        words=(
            *("torque", "moment", "drehmoment", "couple", "moment de couple"),
            *("par", "par de torsion", "momento", "momento de torsion", "torque on bob"),
        ),
        symbols=("M",),
        unit_words=_NEWTON_METRES,
    ),
    Quantity(
        "torque_fraction",
        "torque as a share of full scale",
        "",
        "%",
        words=("torque", "drehmoment", "couple", "par", "moment", "momento"),
        symbols=("M",),
        word_units=dict.fromkeys(
            (
                *("relative torque", "percent torque", "torque percent", "% torque", "torque %"),
                *("full scale", "percent full scale", "% full scale", "% fs"),
            ),
            "%",
        )
        | {"torque fraction": "1"},
        unit_words=dict.fromkeys(
            (
                *("% fs", "%fs", "% f.s.", "% full scale", "% of full scale", "% of fs"),
                *("pct", "percent"),
            ),
            "%",
        ),
        percent=True,
        unit_needed=True,
    ),
    Quantity(
        "dial",
        "dial reading",
        "degree",
        "degree",
        words=(
            *("dial", "dial reading", "dial degrees", "dial deflection", "deflection"),
            *("skalenteile", "ablesung", "zeigerausschlag", "cadran", "valeur du cadran"),
            *("lectura", "lectura del dial", "lectura del cuadrante", "reading"),
        ),
        symbols=("θ", "Θ"),
        unit_words={"degrees": "degree", "grad": "degree", "deg.": "degree", "div": "degree"},
    ),
    Quantity(
        "flow",
        "flow",
        "m^3/s",
        "m3/h",
        words=(
            *("flow", "flow rate", "flowrate", "volume flow", "volume flow rate"),
            *("volumetric flow", "volumetric flow rate", "volumenstrom", "durchfluss"),
            *("volumetric flowrate", "debit", "debit volumique", "debit volumetrique"),
            *("caudal", "caudal volumetrico"),
        ),
        symbols=("Q", "V̇"),
        word_units={"gpm": "gpm"},
    ),
    Quantity(
        "velocity",
        "mean velocity",
        "m/s",
        "m/s",
        words=(
            *("velocity", "flow velocity", "mean velocity", "bulk velocity"),
            *("geschwindigkeit", "stromungsgeschwindigkeit", "vitesse", "vitesse moyenne"),
            *("velocidad", "velocidad media"),
        ),
        symbols=("V", "v", "u"),
    ),
    Quantity(
        "pressure_drop",
        "pressure drop",
        "Pa",
        "Pa",
        words=(
            *("pressure drop", "pressure difference", "differential pressure", "pressure loss"),
            *("delta p", "deltap", "δp", "δ p", "∆p", "dp", "druckverlust", "druckabfall"),
            *("druckdifferenz", "differenzdruck", "perte de charge", "perte de pression"),
            *("chute de pression", "pression differentielle", "caida de presion"),
            *("perdida de carga", "diferencia de presion", "perdida de presion"),
        ),
        unit_words=_PRESSURES,
    ),
    Quantity(
        "tube_diameter",
        "tube diameter",
        "m",
        "mm",
        words=(
            *("tube diameter", "pipe diameter", "capillary diameter", "diameter"),
            *("inside diameter", "inner diameter", "internal diameter", "bore"),
            *("rohrdurchmesser", "durchmesser", "innendurchmesser", "kapillardurchmesser"),
            *("diametre", "diametre interieur", "diametro", "diametro interior"),
        ),
        symbols=("D", "d"),
    ),
    Quantity(
        "tube_length",
        "tube length",
        "m",
        "m",
        words=(
            *("tube length", "pipe length", "capillary length", "length", "rohrlange", "lange"),
            *("kapillarlange", "longueur", "longueur du tube", "longitud", "longitud del tubo"),
        ),
        symbols=("L", "l"),
    ),
    Quantity(
        "gap",
        "gap",
        "m",
        "mm",
        words=(
            *("gap", "plate gap", "gap width", "gap height", "spalt", "spaltweite"),
            *("spalthohe", "plattenabstand", "entrefer", "separacion"),
        ),
        symbols=("h",),
    ),
    Quantity(
        "temperature",
        "temperature",
        "K",
        "°C",
        words=("temperature", "temp", "temperatur", "temperatura", "probentemperatur"),
        symbols=("T", "ϑ"),
        unit_words=_DEGREES,
    ),
    Quantity(
        "solids_fraction",
        "solids fraction",
        "",
        solids.PERCENT,
        words=solids.WORDS,
        symbols=("φ", "Φ", "ϕ", "Cv", "Cw", "TS"),
        word_units=dict.fromkeys(solids.SHARE_WORDS, solids.SHARE) | solids.PERCENT_WORDS,
        unit_words=solids.UNITS,
        refused_units=solids.REFUSED,
        percent=True,
        below=1.0,
    ),
    Quantity(
        "time",
        "time",
        "s",
        "s",
        words=(
            *("time", "elapsed time", "test time", "time elapsed", "zeit", "messzeit"),
            *("versuchszeit", "temps", "temps ecoule", "tiempo", "tiempo transcurrido"),
        ),
        symbols=("t",),
        unit_words=_TIMES,
    ),
    Quantity(
        "branch",
        "branch",
        "",
        "",
        words=(
            *("branch", "sweep", "sweep branch", "direction", "ramp", "curve branch"),
            *("richtung", "ast", "rampe", "sens", "direccion", "rama", "sentido"),
        ),
        text=True,
    ),
)

BY_KEY: dict[str, Quantity] = {quantity.key: quantity for quantity in QUANTITIES}
NUMBER_KEYS: tuple[str, ...] = tuple(q.key for q in QUANTITIES if not q.text)

# A row in which one of these is 0 was taken at rest and is no point of a flow curve.
DRIVEN_KEYS: tuple[str, ...] = (
    *("rate", "stress", "viscosity", "angular_speed", "torque", "torque_fraction"),
    *("dial", "flow", "velocity", "pressure_drop"),
)

# Pairs of columns that make readings, best first: as the instrument converted them,
# as it measured them, and mixtures that need the geometry.
CONVERTED_PAIRS: tuple[tuple[str, str], ...] = (
    ("rate", "stress"),
    ("rate", "viscosity"),
    ("stress", "viscosity"),
)
MEASURED_PAIRS: tuple[tuple[str, str], ...] = (
    ("angular_speed", "torque"),
    ("angular_speed", "torque_fraction"),
    ("angular_speed", "dial"),
    ("flow", "pressure_drop"),
    ("velocity", "pressure_drop"),
)
MIXED_PAIRS: tuple[tuple[str, str], ...] = (
    ("angular_speed", "stress"),
    ("angular_speed", "viscosity"),
    ("rate", "torque"),
    ("rate", "torque_fraction"),
    ("rate", "dial"),
    ("flow", "stress"),
    ("velocity", "stress"),
    ("rate", "pressure_drop"),
)
