"""Every symbol's word, usual unit and meaning, said once; sheets print their notation from it.

Symbols are those of the standards the sheets cite (ACI 318-19, AISC 360-22, EN 1990, EN 1992-1-1,
EN 1993-1-1) and of statics; from memory. Where two standards use one letter for two things, the author of
a line says which it is with ``word``.
"""

from __future__ import annotations

from typing import NamedTuple

from calcpack.sheet.symbols import read_symbol


class Entry(NamedTuple):
    """What a symbol stands for."""

    word: str
    unit: str
    meaning: str = ""

    @property
    def text(self) -> str:
        """As the notation table has it."""
        return f"{self.word}, {self.meaning}" if self.meaning else self.word


_TABLE: dict[str, tuple[str, ...]] = {
    # plan and load
    "ell": ("span", "m", "between supports, or overhang"),
    "L": ("long side", "m", "of a panel; or span"),
    "S": ("short side", "m", "of a panel"),
    "m": ("side ratio", "1", "short side over long side"),
    "t": ("thickness", "mm"),
    "x": ("place", "m", "from the beam's start"),
    "g": ("dead load", "kPa", "permanent, on the panel"),
    "q": ("live load", "kPa", "on the panel"),
    "r": ("roof live load", "kPa", "on the panel"),
    "s": ("snow load", "kPa", "on the panel"),
    "Delta g": ("superimposed dead load", "kPa", "beside the slab's own weight"),
    "w": ("line load", "kN/m"),
    "w_g": ("dead line load", "kN/m"),
    "w_q": ("live line load", "kN/m"),
    "w_r": ("roof live line load", "kN/m"),
    "w_s": ("snow line load", "kN/m"),
    "w_eq": ("equivalent line load", "kN/m", "uniform, doing the same as the actual load"),
    "w_u": ("factored line load", "kN/m"),
    "kappa": ("ratio", "1", "of the equivalent load to the peak of the actual one"),
    "gamma": ("unit weight", "kN/m^3"),
    "P": ("point load", "kN"),
    "F": ("point load", "kN"),
    "W": ("total load", "kN"),
    "R": ("reaction", "kN", "upward positive"),
    "V": ("shear", "kN"),
    "M": ("bending moment", "kN*m", "sagging positive"),
    "V_max": ("largest shear", "kN"),
    "M_max": ("largest moment", "kN*m"),
    "M_min": ("least moment", "kN*m", "hogging negative"),
    "delta": ("deflection", "mm", "downward positive"),
    "Delta": ("deflection", "mm", "downward positive"),
    "E": ("modulus of elasticity", "MPa"),
    "I": ("second moment of area", "mm^4"),
    "A": ("area", "mm^2"),
    "a": ("length", "m"),
    "b": ("width", "mm"),
    "h": ("depth", "mm"),
    "eta": ("utilisation", "1", "demand over resistance"),
    "psi": ("combination factor", "1"),
    "xi": ("reduction factor", "1", "of permanent load, EN 1990"),
    "K_LL": ("live load element factor", "1"),
    "A_T": ("tributary area", "m^2"),
    # reinforced concrete, ACI 318
    "f'_c": ("concrete strength", "MPa", "specified"),
    "f_y": ("yield strength", "MPa"),
    "f_yt": ("yield strength of stirrups", "MPa"),
    "A_s": ("tension reinforcement", "mm^2"),
    "A'_s": ("compression reinforcement", "mm^2"),
    "A_v": ("shear reinforcement", "mm^2", "within one spacing"),
    "A_s,min": ("least tension reinforcement", "mm^2"),
    "b_w": ("web width", "mm"),
    "b_f": ("flange width", "mm"),
    "h_f": ("flange depth", "mm"),
    "b_eff": ("effective flange width", "mm"),
    "d": ("effective depth", "mm"),
    "c": ("depth to the neutral axis", "mm"),
    "beta_1": ("stress block factor", "1", "block depth over depth to the neutral axis"),
    "epsilon_t": ("net tensile strain", "1", "of the outermost bars"),
    "phi": ("strength reduction factor", "1"),
    "lambda": ("lightweight factor", "1"),
    "lambda_s": ("size effect factor", "1"),
    "rho_w": ("steel ratio", "1", "tension steel over web area"),
    "M_u": ("factored moment", "kN*m"),
    "V_u": ("factored shear", "kN"),
    "M_n": ("nominal moment strength", "kN*m"),
    "phi M_n": ("design moment strength", "kN*m"),
    "V_n": ("nominal shear strength", "kN"),
    "phi V_n": ("design shear strength", "kN"),
    "V_c": ("shear strength of the concrete", "kN"),
    "V_s": ("shear strength of the stirrups", "kN"),
    "M_cr": ("cracking moment", "kN*m"),
    "M_a": ("service moment", "kN*m"),
    "I_e": ("effective second moment of area", "mm^4"),
    "I_cr": ("cracked second moment of area", "mm^4"),
    "I_g": ("gross second moment of area", "mm^4"),
    "E_c": ("modulus of concrete", "MPa"),
    "E_s": ("modulus of steel", "MPa"),
    "f_r": ("modulus of rupture", "MPa"),
    "n": ("number", "1", "of bars; or ratio of the moduli"),
    "d_b": ("bar diameter", "mm"),
    "c_c": ("clear cover", "mm"),
    # reinforced concrete, EN 1992
    "f_ck": ("concrete strength", "MPa", "characteristic"),
    "f_cd": ("concrete strength", "MPa", "design"),
    "f_ctm": ("tensile strength of concrete", "MPa", "mean"),
    "f_yk": ("yield strength", "MPa", "characteristic"),
    "f_yd": ("yield strength", "MPa", "design"),
    "f_ywd": ("yield strength of stirrups", "MPa", "design"),
    "alpha_cc": ("long-term factor", "1", "on the concrete strength"),
    "gamma_C": ("partial factor for concrete", "1"),
    "gamma_S": ("partial factor for reinforcement", "1"),
    "z": ("lever arm", "mm"),
    "M_Ed": ("design moment", "kN*m"),
    "V_Ed": ("design shear", "kN"),
    "M_Rd": ("moment resistance", "kN*m"),
    "V_Rd": ("shear resistance", "kN"),
    "V_Rd,c": ("shear resistance of the concrete", "kN", "without stirrups"),
    "V_Rd,s": ("shear resistance of the stirrups", "kN"),
    "V_Rd,max": ("shear resistance of the struts", "kN"),
    "theta": ("strut angle", "deg"),
    "nu_1": ("strut strength factor", "1"),
    "k": ("size factor", "1"),
    "rho_l": ("steel ratio", "1", "tension steel over web area"),
    "w_k": ("crack width", "mm", "characteristic"),
    "s_r,max": ("largest crack spacing", "mm"),
    "sigma_s": ("steel stress", "MPa", "under service loads"),
    "c_nom": ("nominal cover", "mm"),
    "E_cm": ("modulus of concrete", "MPa", "mean"),
    # steel, AISC 360 and EN 1993
    "F_y": ("yield strength", "MPa"),
    "F_u": ("tensile strength", "MPa"),
    "F_cr": ("critical stress", "MPa"),
    "M_p": ("plastic moment", "kN*m"),
    "Z_x": ("plastic section modulus", "mm^3"),
    "S_x": ("elastic section modulus", "mm^3"),
    "L_b": ("unbraced length", "m"),
    "L_p": ("limiting length for yielding", "m"),
    "L_r": ("limiting length for inelastic buckling", "m"),
    "C_b": ("moment diagram factor", "1"),
    "C_v1": ("web shear factor", "1"),
    "A_w": ("web area", "mm^2"),
    "J": ("torsion constant", "mm^4"),
    "C_w": ("warping constant", "mm^6"),
    "r_ts": ("effective radius of gyration", "mm"),
    "r_y": ("radius of gyration", "mm", "about the weak axis"),
    "Omega": ("safety factor", "1"),
    "f_u": ("tensile strength", "MPa"),
    "W_pl,y": ("plastic section modulus", "mm^3"),
    "W_el,y": ("elastic section modulus", "mm^3"),
    "I_y": ("second moment of area", "mm^4", "about the strong axis"),
    "I_z": ("second moment of area", "mm^4", "about the weak axis"),
    "I_t": ("torsion constant", "mm^4"),
    "I_w": ("warping constant", "mm^6"),
    "G": ("shear modulus", "MPa"),
    "C_1": ("moment diagram factor", "1"),
    "M_cr,0": ("critical moment", "kN*m", "elastic, lateral-torsional"),
    "M_c,Rd": ("section moment resistance", "kN*m"),
    "M_b,Rd": ("buckling moment resistance", "kN*m"),
    "V_pl,Rd": ("plastic shear resistance", "kN"),
    "chi_LT": ("buckling reduction factor", "1", "lateral-torsional"),
    "lambdabar_LT": ("slenderness", "1", "lateral-torsional, relative"),
    "alpha_LT": ("imperfection factor", "1", "lateral-torsional"),
    "Phi_LT": ("auxiliary value", "1", "of the buckling curve"),
    "gamma_M0": ("partial factor for sections", "1"),
    "gamma_M1": ("partial factor for buckling", "1"),
    "epsilon": ("yield strength factor", "1", "root of 235 MPa over the yield strength"),
}

GLOSSARY: dict[str, Entry] = {symbol: Entry(*entry) for symbol, entry in _TABLE.items()}


def look_up(symbol: str) -> tuple[str, Entry] | None:
    """What a symbol stands for, and the symbol it is explained under: its index may be shorter.

    Examples
    --------
    >>> look_up("q_1"), look_up("zeta")
    (('q', Entry(word='live load', unit='kPa', meaning='on the panel')), None)
    """
    read = read_symbol(symbol)
    head = read.name.rpartition(" ")[0]
    indices = list(read.indices)
    while True:
        index = f"_{','.join(indices)}" if indices else ""
        base = read.base + index
        for name in (base, f"{head} {base}" if head else base):
            if name in GLOSSARY:
                return name, GLOSSARY[name]
        if not indices:
            return None
        last = indices.pop()
        letters = last.rstrip("0123456789")
        if letters and letters != last:  # "w_g1" is explained as "w_g"
            indices.append(letters)
