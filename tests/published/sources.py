"""Publications that the evidence page cites. Editions and years of textbooks are from memory."""

from published.evidence_row import Source

INCROPERA = Source(
    "Incropera & DeWitt",
    "F. P. Incropera, D. P. DeWitt, T. L. Bergman, A. S. Lavine, 2007, Fundamentals of Heat and "
    "Mass Transfer, 6th ed., Wiley",
)
CENGEL = Source(
    "Cengel", "Y. A. Cengel, 2003, Heat Transfer: A Practical Approach, 2nd ed., McGraw-Hill"
)
HOLMAN = Source("Holman", "J. P. Holman, 2010, Heat Transfer, 10th ed., McGraw-Hill")
SUKHATME = Source(
    "Sukhatme", "S. P. Sukhatme, 2005, A Textbook on Heat Transfer, 4th ed., Universities Press"
)
LIENHARD = Source(
    "Lienhard", "J. H. Lienhard IV, J. H. Lienhard V, 2008, A Heat Transfer Textbook, 3rd ed."
)
JANNA = Source("Janna", "W. S. Janna, 2000, Engineering Heat Transfer, 2nd ed., CRC Press")
KREITH = Source(
    "Kreith", "F. Kreith, R. M. Manglik, M. S. Bohn, 2011, Principles of Heat Transfer, 7th ed."
)
BIMBHRA = Source("Bimbhra", "P. S. Bimbhra, Power Electronics, Khanna Publishers")
WILDI = Source(
    "Wildi", "T. Wildi, 2006, Electrical Machines, Drives and Power Systems, 6th ed., Prentice Hall"
)

CHURCHILL_CHU = Source(
    "Churchill & Chu 1975",
    "S. W. Churchill, H. H. S. Chu, 1975, International Journal of Heat and Mass Transfer 18, "
    "1323-1329 (plate) and 1049-1053 (cylinder)",
)
MCADAMS = Source("McAdams", "W. H. McAdams, 1954, Heat Transmission, 3rd ed., McGraw-Hill")
MORGAN = Source(
    "Morgan 1975",
    "V. T. Morgan, 1975, The overall convective heat transfer from smooth circular cylinders, "
    "Advances in Heat Transfer 11, 199-264: a law through others' measurements",
)
HOLLANDS = Source(
    "Hollands et al. 1976",
    "K. G. T. Hollands, T. E. Unny, G. D. Raithby, L. Konicek, 1976, Free convective heat transfer "
    "across inclined air layers, Journal of Heat Transfer 98, 189-193",
)
ELSHERBINY = Source(
    "ElSherbiny et al. 1982",
    "S. M. ElSherbiny, G. D. Raithby, K. G. T. Hollands, 1982, Heat transfer by natural convection "
    "across vertical and inclined air layers, Journal of Heat Transfer 104, 96-102",
)
GLOBE_DROPKIN = Source(
    "Globe & Dropkin 1959",
    "S. Globe, D. Dropkin, 1959, Natural-convection heat transfer in liquids confined by two "
    "horizontal plates and heated from below, Journal of Heat Transfer 81, 24-28",
)
BAR_COHEN = Source(
    "Bar-Cohen & Rohsenow 1984",
    "A. Bar-Cohen, W. M. Rohsenow, 1984, Thermally optimum spacing of vertical, natural convection "
    "cooled, parallel plates, Journal of Heat Transfer 106, 116-123",
)
ELENBAAS = Source(
    "Elenbaas 1942",
    "W. Elenbaas, 1942, Heat dissipation of parallel plates by free convection, Physica 9, 1-28: "
    "his law through his measurements",
)
SPARROW_ABRAHAM_TONG = Source(
    "Sparrow, Abraham & Tong 2004",
    "E. M. Sparrow, J. P. Abraham, J. C. K. Tong, 2004, Archival correlations for average heat "
    "transfer coefficients for non-circular and circular cylinders and for spheres in cross-flow, "
    "International Journal of Heat and Mass Transfer 47, 5285-5296",
)
AZAR_GRAEBNER = Source(
    "Azar & Graebner 1996",
    "K. Azar, J. E. Graebner, 1996, Experimental determination of thermal conductivity of printed "
    "wiring boards, 12th IEEE SEMI-THERM Symposium, 169-182: a fit to measured boards",
)
IDELCHIK = Source(
    "Idelchik",
    "I. E. Idelchik, 1986, Handbook of Hydraulic Resistance, 2nd ed., Hemisphere: tables of "
    "measurements",
)
BLEVINS = Source(
    "Blevins",
    "R. D. Blevins, 1984, Applied Fluid Dynamics Handbook, Van Nostrand Reinhold, as the open "
    "library fluids has it",
)
BS_5925 = Source("BS 5925", "BS 5925:1991, Code of practice for ventilation principles")
MIXED_BOX = Source(
    "two vents, well mixed",
    "balance of buoyancy and losses of two equal vents of discharge coefficient 0.60, air mixed, "
    "cp 1006.5, densities of both streams; computed for this project, apart from the program",
)
VENTED_CARDS = Source(
    "vented cards, 1997",
    "A practical formula for air-cooled boards in ventilated enclosures, ElectronicsCooling, "
    "September 1997 (group of G. Guglielmini, E. Nannei, M. Misale, Genoa, from memory)",
)
SIMPLIFIED = Source(
    "simplified relations of air",
    "relations of laminar free convection in air at one atmosphere, h = C (dT/L)^(1/4), as trade "
    "tables and textbooks have them",
)
COOLPROP = Source(
    "CoolProp",
    "I. H. Bell, J. Wronski, S. Quoilin, V. Lemort, 2014, Industrial & Engineering Chemistry "
    "Research 53, 2498-2508: the open library CoolProp, dry air at 101325 Pa",
)
HT_LIBRARY = Source("ht", "C. Bell and contributors, ht, an open library of heat transfer")
ISA = Source("Standard Atmosphere", "U.S. Standard Atmosphere 1976 and ISO 2533:1975")
RADIATION = Source("grey exchange", "Stefan-Boltzmann law and grey parallel plates, any textbook")
SERIES = Source(
    "double cosine series",
    "thin plate k t lap(T) - h T + q = 0 with adiabatic edges, 600 terms either way, summed for "
    "this project apart from the program",
)
DISC = Source(
    "disc on a plate",
    "H. S. Carslaw, J. C. Jaeger, 1959, Conduction of Heat in Solids, 2nd ed., Oxford: Bessel "
    "solution, evaluated for this project apart from the program",
)
FIN = Source("fin of even section", "fin with adiabatic tip, any textbook")
LAYERS = Source("sums over layers", "sum k t / sum t in plane, common practice")

EXPERIMENT = Source(
    "numerical experiment",
    "numerical experiments made for this project: laminar free convection of air without "
    "radiation, solved on fine grids with a general-purpose finite-volume flow solver",
)
TAMAYOL = Source(
    "Tamayol et al. 2012",
    "A. Tamayol, F. McGregor, M. Bahrami, 2012, Thermal assessment of naturally cooled electronic "
    "enclosures with rectangular fins, Journal of Electronic Packaging 134, 034503; its abstract",
)
VDE = Source(
    "area method",
    "effective area and 5.5 W/m2K for painted sheet steel, DIN 57660-500 / VDE 0660-500, worked in "
    "trade publications and manuals of drives and controllers",
)
IEC_60890 = Source(
    "IEC TR 60890",
    "IEC TR 60890, temperature rise of assemblies by calculation; its tables are from memory, "
    "medium confidence",
)
HOUSING_2021 = Source("design article, 2021", "a design article of 2021 on a sealed housing")
JEDEC = Source(
    "typical theta JA",
    "typical junction-to-ambient resistances on a high-conductivity board in still air, JESD51-2A "
    "and JESD51-7 conditions; values from memory, spread 40 %",
)
