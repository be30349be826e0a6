//! The elements and their standard atomic weights.

/// A chemical element, by atomic number less one.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Element(u8);

impl Element {
    /// The element of a symbol (`Fe`), hydrogen to uranium.
    pub fn from_symbol(symbol: &str) -> Option<Self> {
        let place = ELEMENTS.iter().position(|(s, _, _)| *s == symbol)?;
        u8::try_from(place).ok().map(Self)
    }

    pub fn symbol(self) -> &'static str {
        ELEMENTS[usize::from(self.0)].0
    }

    pub fn name(self) -> &'static str {
        ELEMENTS[usize::from(self.0)].1
    }

    /// True for metals; the metalloids that act as non-metals in water (B, Si, As, Se, Te) are not counted.
    pub fn is_metal(self) -> bool {
        !matches!(
            self.symbol(),
            "H" | "He"
                | "B"
                | "C"
                | "N"
                | "O"
                | "F"
                | "Ne"
                | "Si"
                | "P"
                | "S"
                | "Cl"
                | "Ar"
                | "As"
                | "Se"
                | "Br"
                | "Kr"
                | "Te"
                | "I"
                | "Xe"
                | "At"
                | "Rn"
        )
    }

    /// Standard atomic weight, g/mol.
    pub fn molar_mass(self) -> f64 {
        ELEMENTS[usize::from(self.0)].2
    }
}

/// Symbol, name, standard atomic weight in g/mol: abridged values of the IUPAC Commission on Isotopic Abundances and Atomic
/// Weights, 2021 (Prohaska et al., Pure Appl. Chem. 94 (2022) 573); mass number of the longest-lived isotope where there is
/// no standard value. Values from memory.
const ELEMENTS: [(&str, &str, f64); 92] = [
    ("H", "hydrogen", 1.008),
    ("He", "helium", 4.0026),
    ("Li", "lithium", 6.94),
    ("Be", "beryllium", 9.0122),
    ("B", "boron", 10.81),
    ("C", "carbon", 12.011),
    ("N", "nitrogen", 14.007),
    ("O", "oxygen", 15.999),
    ("F", "fluorine", 18.998),
    ("Ne", "neon", 20.18),
    ("Na", "sodium", 22.99),
    ("Mg", "magnesium", 24.305),
    ("Al", "aluminium", 26.982),
    ("Si", "silicon", 28.085),
    ("P", "phosphorus", 30.974),
    ("S", "sulfur", 32.06),
    ("Cl", "chlorine", 35.45),
    ("Ar", "argon", 39.95),
    ("K", "potassium", 39.098),
    ("Ca", "calcium", 40.078),
    ("Sc", "scandium", 44.956),
    ("Ti", "titanium", 47.867),
    ("V", "vanadium", 50.942),
    ("Cr", "chromium", 51.996),
    ("Mn", "manganese", 54.938),
    ("Fe", "iron", 55.845),
    ("Co", "cobalt", 58.933),
    ("Ni", "nickel", 58.693),
    ("Cu", "copper", 63.546),
    ("Zn", "zinc", 65.38),
    ("Ga", "gallium", 69.723),
    ("Ge", "germanium", 72.63),
    ("As", "arsenic", 74.922),
    ("Se", "selenium", 78.971),
    ("Br", "bromine", 79.904),
    ("Kr", "krypton", 83.798),
    ("Rb", "rubidium", 85.468),
    ("Sr", "strontium", 87.62),
    ("Y", "yttrium", 88.906),
    ("Zr", "zirconium", 91.224),
    ("Nb", "niobium", 92.906),
    ("Mo", "molybdenum", 95.95),
    ("Tc", "technetium", 97.0),
    ("Ru", "ruthenium", 101.07),
    ("Rh", "rhodium", 102.91),
    ("Pd", "palladium", 106.42),
    ("Ag", "silver", 107.87),
    ("Cd", "cadmium", 112.41),
    ("In", "indium", 114.82),
    ("Sn", "tin", 118.71),
    ("Sb", "antimony", 121.76),
    ("Te", "tellurium", 127.6),
    ("I", "iodine", 126.9),
    ("Xe", "xenon", 131.29),
    ("Cs", "caesium", 132.91),
    ("Ba", "barium", 137.33),
    ("La", "lanthanum", 138.91),
    ("Ce", "cerium", 140.12),
    ("Pr", "praseodymium", 140.91),
    ("Nd", "neodymium", 144.24),
    ("Pm", "promethium", 145.0),
    ("Sm", "samarium", 150.36),
    ("Eu", "europium", 151.96),
    ("Gd", "gadolinium", 157.25),
    ("Tb", "terbium", 158.93),
    ("Dy", "dysprosium", 162.5),
    ("Ho", "holmium", 164.93),
    ("Er", "erbium", 167.26),
    ("Tm", "thulium", 168.93),
    ("Yb", "ytterbium", 173.05),
    ("Lu", "lutetium", 174.97),
    ("Hf", "hafnium", 178.49),
    ("Ta", "tantalum", 180.95),
    ("W", "tungsten", 183.84),
    ("Re", "rhenium", 186.21),
    ("Os", "osmium", 190.23),
    ("Ir", "iridium", 192.22),
    ("Pt", "platinum", 195.08),
    ("Au", "gold", 196.97),
    ("Hg", "mercury", 200.59),
    ("Tl", "thallium", 204.38),
    ("Pb", "lead", 207.2),
    ("Bi", "bismuth", 208.98),
    ("Po", "polonium", 209.0),
    ("At", "astatine", 210.0),
    ("Rn", "radon", 222.0),
    ("Fr", "francium", 223.0),
    ("Ra", "radium", 226.0),
    ("Ac", "actinium", 227.0),
    ("Th", "thorium", 232.04),
    ("Pa", "protactinium", 231.04),
    ("U", "uranium", 238.03),
];
