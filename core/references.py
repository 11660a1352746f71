"""The one bibliography: key -> citation, with how well each was checked.

A key stands in square brackets in docstrings, or as the source of a card or a table. A test checks that each
key used is here, and that none here is unused.

Status of a source, as it is shown to the user:
  checked       the text or table was read while the number was entered
  from memory   the source is named, the figure was not read again there
  secondary     a copy or a page that quotes the source was read
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Reference:
    """One source: what it is, and how well the figures taken from it were checked."""

    citation: str
    status: str


REFERENCES: dict[str, Reference] = {
    "AWWA-B201": Reference(
        "ANSI/AWWA B201-98, soda ash: purity and largest solubility in the foreword, minimum of the body from memory",
        "secondary",
    ),
    "AWWA-B202": Reference(
        "ANSI/AWWA B202, quicklime and hydrated lime",
        "from memory",
    ),
    "AWWA-B501": Reference(
        "ANSI/AWWA B501, sodium hydroxide (caustic soda)",
        "from memory",
    ),
    "AWWA-C400": Reference(
        "ANSI/AWWA C400, asbestos-cement pressure pipe: aggressiveness index; bands from memory",
        "secondary",
    ),
    "BLAND77": Reference(
        "R. G. Bland, New finite pivoting rules for the simplex method, Math. Oper. Res. 2 (1977) 103",
        "from memory",
    ),
    "BONNER-SMITH57": Reference(
        "O. D. Bonner, L. L. Smith, A selectivity scale for some divalent cations, J. Phys. Chem. 61 (1957) 326",
        "from memory",
    ),
    "BP79": Reference(
        "Bradley, D.J. and Pitzer, K.S., 1979, J. Phys. Chem. 83, 1599: dielectric constant of water",
        "secondary",
    ),
    "CA-HSC116785": Reference("California Health and Safety Code § 116785, water softeners", "checked"),
    "CARRIER": Reference(
        "Carrier, Handbook of Air Conditioning System Design, water conditioning: short form of the "
        "saturation pH, bands of the Ryznar index",
        "secondary",
    ),
    "CH-CLASSES": Reference(
        "Swiss hardness steps in French degrees, as water suppliers print them",
        "from memory",
    ),
    "CRC-HANDBOOK": Reference(
        "CRC Handbook of Chemistry and Physics: solubility of compounds; concentrative properties of solutions",
        "from memory",
    ),
    "DANTZIG63": Reference(
        "G. B. Dantzig, Linear Programming and Extensions (Princeton University Press, 1963), bounded variables",
        "from memory",
    ),
    "DAVIES62": Reference(
        "Davies, C.W., 1962, Ion Association: the activity coefficient with the term 0.3 I",
        "secondary",
    ),
    "DE-TRADE-MONTHLY": Reference(
        "German building-services trade monthly, a worked example to DIN 1988-300",
        "secondary",
    ),
    "DE-WATER-USE": Reference(
        "German water industry association, use per person and day, as reported by news items 2019 and 2023",
        "secondary",
    ),
    "DIN19636-100": Reference(
        "DIN 19636-100, softeners with cation exchangers in drinking-water installations",
        "from memory",
    ),
    "DIN1988-300": Reference(
        "DIN 1988-300, peak flow of drinking-water installations, as a German building-services glossary gives it",
        "secondary",
    ),
    "DIN38402-62": Reference(
        "DIN 38402-62: plausibility of analyses by ion balance (A 62), 2014",
        "secondary",
    ),
    "DIN38404-10": Reference("DIN 38404-10: Calcitsättigung eines Wassers (C 10), 2012", "from memory"),
    "DIN38409-6": Reference("DIN 38409-6: Wasserhärte (H 6), 1986; 1 °dH = 0.1783 mmol/L", "from memory"),
    "DIN38409-7": Reference(
        "DIN 38409-7, acid and base capacity (H 7), with the correction for CO2 at the end point",
        "from memory",
    ),
    "EN12502-2": Reference(
        "EN 12502-2:2004, protection of metallic materials against corrosion: copper and copper alloys",
        "from memory",
    ),
    "EN12502-3": Reference(
        "EN 12502-3:2004, protection of metallic materials against corrosion: hot dip galvanised ferrous materials",
        "from memory",
    ),
    "EN1717": Reference(
        "EN 1717, protection against pollution of potable water, and UK practice on fluid categories",
        "from memory",
    ),
    "EN806-5": Reference(
        "EN 806-5, operation and maintenance of drinking-water installations",
        "from memory",
    ),
    "EPA-DWR": Reference(
        "US EPA, National Primary and Secondary Drinking Water Regulations, 40 CFR 141 and 143",
        "from memory",
    ),
    "EPA-SODIUM": Reference("US EPA, safe-water answer page on sodium, citing EPA 822-R-03-006", "checked"),
    "EPA-SOFTENING": Reference(
        "US EPA, EPA/600/R-98/044, and Sorg, Schock and Lytle, J. AWWA 91(8), 1999: softening and metals",
        "checked",
    ),
    "ERGUN52": Reference(
        "S. Ergun, Fluid flow through packed columns, Chem. Eng. Prog. 48 (1952) 89",
        "from memory",
    ),
    "EU2020-2184": Reference(
        "Directive (EU) 2020/2184 on the quality of water intended for human consumption",
        "from memory",
    ),
    "EXACT": Reference(
        "Exact by definition: SI Brochure (2019); international yard and pound; gallon acts",
        "checked",
    ),
    "GAINES-THOMAS53": Reference(
        "G. L. Gaines, H. C. Thomas, Adsorption studies on clay minerals II, J. Chem. Phys. 21 (1953) 714",
        "from memory",
    ),
    "GUM": Reference(
        "JCGM 100:2008, Guide to the expression of uncertainty in measurement (GUM), sections 4.3 and 5.1",
        "from memory",
    ),
    "HEATER-SITES": Reference(
        "US engineering-society paper on residential water heaters at four sites, abstract",
        "checked",
    ),
    "IPC2018-E": Reference(
        "International Plumbing Code 2018, appendix E, tables E103.3(2) and E103.3(3)",
        "secondary",
    ),
    "ISO5725-2": Reference(
        "ISO 5725-2, repeatability and reproducibility of a measurement method; Grubbs' test and its critical values",
        "from memory",
    ),
    "ISO6059": Reference("ISO 6059:1984, sum of calcium and magnesium by EDTA titration", "from memory"),
    "IUPAC21": Reference(
        "IUPAC CIAAW, Standard atomic weights 2021 (abridged or conventional values)",
        "checked",
    ),
    "KELL75": Reference(
        "G. S. Kell, Density, thermal expansivity and compressibility of liquid water from 0 to 150 °C, "
        "J. Chem. Eng. Data 20 (1975) 97",
        "from memory",
    ),
    "KESTIN78": Reference(
        "Kestin, J., Sokolov, M. and Wakeham, W.A., 1978, J. Phys. Chem. Ref. Data 7, 941: viscosity of water",
        "from memory",
    ),
    "KHAN-RICHARDSON89": Reference(
        "A. R. Khan, J. F. Richardson, Fluid-particle interactions and flow characteristics of "
        "fluidized beds, Chem. Eng. Commun. 78 (1989) 111",
        "from memory",
    ),
    "KIT-MAKER": Reference("A test-kit maker's support note on accuracy at low hardness", "checked"),
    "LARSON58": Reference(
        "Larson, T.E. and Skold, R.V., 1958, Corrosion 14, 285: chloride and sulfate against alkalinity",
        "from memory",
    ),
    "LHS79": Reference(
        "M. D. McKay, R. J. Beckman, W. J. Conover, Technometrics 21 (1979) 239: sampling in even layers",
        "from memory",
    ),
    "LIME-COURSE": Reference(
        "Operator course cards and a textbook page on lime-soda softening: residuals of 30 mg/L Ca and "
        "10 mg/L Mg as CaCO3",
        "secondary",
    ),
    "NSF44": Reference(
        "NSF/ANSI 44, residential cation exchange water softeners, section 7 as a US national- "
        "laboratory building guide quotes it, tests as trade-press columns describe them",
        "secondary",
    ),
    "NSPC-B54": Reference("National Standard Plumbing Code, table B.5.4", "checked"),
    "OPERATOR-TEXT": Reference(
        "Operator-training text on softener cycles and a copied chapter of an industrial water handbook",
        "secondary",
    ),
    "PA13": Reference(
        "Parkhurst, D.L. and Appelo, C.A.J., 2013, USGS Techniques and Methods 6-A43: forms of the "
        "activity coefficients, Debye-Hückel slopes, activity of water",
        "secondary",
    ),
    "PB82": Reference(
        "Plummer, L.N. and Busenberg, E., 1982, Geochim. Cosmochim. Acta 46, 1011: solubilities of "
        "calcite, aragonite and vaterite, 0 to 90 °C",
        "secondary",
    ),
    "PUCKORIUS91": Reference(
        "Puckorius, P.R. and Brooke, J.M., 1991, Corrosion 47, 280: a practical scaling index",
        "from memory",
    ),
    "REU2016": Reference(
        "Residential End Uses of Water, Version 2 (Water Research Foundation, 2016)",
        "from memory",
    ),
    "RICHARDSON-ZAKI54": Reference(
        "J. F. Richardson, W. N. Zaki, Sedimentation and fluidisation, Trans. Inst. Chem. Eng. 32 (1954) 35",
        "from memory",
    ),
    "SALT-INSTITUTE": Reference(
        "Salt producers' institute, table of sodium chloride solubility by temperature",
        "checked",
    ),
    "SCHILLER-NAUMANN33": Reference(
        "L. Schiller, A. Naumann, drag of spheres, Z. VDI 77 (1933) 318",
        "from memory",
    ),
    "SM1030E": Reference(
        "Standard Methods for the Examination of Water and Wastewater, 1030 E, checking correctness of analyses",
        "from memory",
    ),
    "SM2320B": Reference(
        "Standard Methods for the Examination of Water and Wastewater, 2320 B, alkalinity by titration",
        "from memory",
    ),
    "SM2330": Reference(
        "Standard Methods for the Examination of Water and Wastewater, 2330, calcium carbonate saturation",
        "from memory",
    ),
    "SM2340B": Reference(
        "Standard Methods for the Examination of Water and Wastewater, 2340 B, hardness by calculation",
        "from memory",
    ),
    "SM2340C": Reference(
        "Standard Methods for the Examination of Water and Wastewater, 2340 C, hardness by EDTA titration",
        "from memory",
    ),
    "SOBOL93": Reference(
        "I. M. Sobol, Sensitivity estimates for nonlinear mathematical models, Math. Model. Comput. Exp. 1 (1993) 407",
        "from memory",
    ),
    "TJ74": Reference(
        "Truesdell, A.H. and Jones, B.F., 1974, J. Res. U.S. Geol. Survey 2, 233: ion sizes, extended "
        "Debye-Hückel form",
        "from memory",
    ),
    "TM5-813-1": Reference(
        "US Army, TM 5-813-1 Water Supply: Sources and General Considerations, table 4-1",
        "checked",
    ),
    "TRADE-BACKWASH": Reference(
        "A trade page and an equipment manual on backwash rate and water temperature",
        "secondary",
    ),
    "TRADE-PRESS": Reference(
        "Articles of the US water-treatment trade press on salt dose, capacity, flow limits and use",
        "secondary",
    ),
    "TRADE-SIZING": Reference(
        "Two independent trade pages on softener sizing: capacity by salt dose, iron rule, intervals",
        "secondary",
    ),
    "TRINKWV2023": Reference("Trinkwasserverordnung of 20 June 2023", "secondary"),
    "UFC3-240": Reference(
        "US Department of Defense, UFC 3-240-13FN (25 May 2005), pages on softeners",
        "checked",
    ),
    "UK-EFRA2018": Reference(
        "House of Commons Environment, Food and Rural Affairs Committee, report on water, section on "
        "reducing demand (2018)",
        "checked",
    ),
    "UK-LEAFLETS": Reference(
        "Hardness leaflets of water companies in the south west and the north west of England",
        "checked",
    ),
    "UPC2021-603": Reference(
        "Uniform Plumbing Code 2021, section 603.4.4, as quoted by the code body",
        "checked",
    ),
    "UPC603": Reference("Uniform Plumbing Code 2021, section 603.4.4, as the code body quotes it", "checked"),
    "US-DISTRICT": Reference(
        "Softening best-practice list of a sewerage district in the US Midwest",
        "checked",
    ),
    "US-TRADE-CLASSES": Reference(
        "Hardness classes of the US softening trade in grains per gallon, two tables that repeat them",
        "secondary",
    ),
    "USGS-CLASSES": Reference(
        "Durfor and Becker 1964, USGS Water-Supply Paper 1812, hardness classes, in two tables quoting it",
        "secondary",
    ),
    "USGS1441": Reference(
        "USGS Circular 1441, Estimated use of water in the United States in 2015; its domestic-use page",
        "secondary",
    ),
    "USGS15": Reference(
        "USGS thermodynamic data file phreeqc.dat in its form of 2015, with the carbonate set of Plummer and Busenberg",
        "checked",
    ),
    "USGS24": Reference("USGS thermodynamic data file phreeqc.dat of 22 May 2024", "checked"),
    "VAC590-900": Reference(
        "Virginia Administrative Code 12VAC5-590-900, cation exchange softening",
        "checked",
    ),
    "WATEQ4F": Reference("USGS thermodynamic data file wateq4f.dat (Ball and Nordstrom, 1991)", "checked"),
    "WHO-GDWQ": Reference("World Health Organization, Guidelines for Drinking-water Quality", "from memory"),
    "WHO-HARDNESS": Reference(
        "World Health Organization 2011, Hardness in Drinking-water (background), as a page quotes it",
        "secondary",
    ),
    "WP02": Reference(
        "Wagner, W. and Pruss, A., 2002, J. Phys. Chem. Ref. Data 31, 387: density along the boiling line",
        "secondary",
    ),
    "WRMG": Reference("Germany, Wasch- und Reinigungsmittelgesetz (WRMG) of 2007, § 9 (2)", "checked"),
    "WRMG-1987": Reference("Germany, the detergent act before 2007, four hardness ranges", "from memory"),
}
