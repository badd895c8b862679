"""The sources of the main tables' records and of the table of elements."""

from __future__ import annotations

from typing import Final

from gibbsmin.data.build.record import SourceEntry

MAIN_SOURCES: Final = (
    SourceEntry(
        "JANAF",
        "M. W. Chase, Jr., NIST-JANAF Thermochemical Tables, 4th edition, J. Phys. Chem. Ref. "
        "Data, Monograph 9 (1998); as text in the package janaf 1.4.0",
        "published values; Cp fitted to the tabulated Cp, S, H - H(298.15 K) and "
        "-[G - H(298.15 K)]/T by the project; tabulated Gibbs energies of formation are not used: "
        "those of 35 tables disagree with the sum over the elements (CH+ without its electron; "
        "(BeO)4, PH2, HS, S2O, CH3SiF3, CH3SiCl3, HBO2(cr), KH(cr), VN0.465, MoO2.875 and "
        "MoO2.889 by stoichiometry; Hg2F2(cr), PbCl4 and NaAlCl4(cr) unexplained; 12 of chromium "
        "and 22 gases of tungsten by superseded references; single cells of B4C(cr), ICl(cr), "
        "Na3AlF6(l) and CsOH(l))",
    ),
    SourceEntry(
        "ATcT",
        "B. Ruscic et al., Active Thermochemical Tables, version 1.112, Argonne National "
        "Laboratory; as a table in the package chemicals 1.5.2",
        "published values; half of the printed 95 % interval is stored as standard uncertainty; "
        "enthalpies of ions are brought to the convention of the electron gas, 6.197 kJ/mol for "
        "each charge; 0 printed for H(g) stands for less than half a joule",
    ),
    SourceEntry(
        "CODATA",
        "J. D. Cox, D. D. Wagman, V. A. Medvedev, CODATA Key Values for Thermodynamics, "
        "Hemisphere (1989)",
        "published values, used for standard uncertainties alone: half of the printed 95 % "
        "interval, where that interval holds the record's value; those of Al, Ar, B, Be, Ag and "
        "Br records are read, the others recalled from memory",
    ),
    SourceEntry(
        "NBS",
        "D. D. Wagman et al., The NBS Tables of Chemical Thermodynamic Properties, J. Phys. Chem. "
        "Ref. Data 11, Supplement 2 (1982)",
        "recalled from memory",
    ),
    SourceEntry(
        "IUPAC-2021",
        "T. Prohaska et al., Standard atomic weights of the elements 2021 (IUPAC Technical "
        "Report), Pure Appl. Chem. 94, 573 (2022)",
        "abridged and conventional values, recalled from memory; deuterium is the isotope's "
        "atomic mass, radon the mass number of its longest-lived isotope",
    ),
)
