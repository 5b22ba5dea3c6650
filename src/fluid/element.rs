//! Chemical elements as they are conserved in the balances.

macro_rules! elements {
    ($($name:ident $mass:literal),+ $(,)?) => {
        /// A conserved chemical element.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
        #[allow(missing_docs, reason = "the variants are the chemical symbols")]
        pub enum Element { $($name,)+ }

        impl Element {
            /// Every element, in index order.
            pub const ALL: &'static [Element] = &[$(Element::$name),+];
            /// The number of elements.
            pub const COUNT: usize = Self::ALL.len();
            /// Chemical symbol.
            pub const fn symbol(self) -> &'static str {
                match self { $(Element::$name => stringify!($name),)+ }
            }
            /// Standard atomic mass, kg/mol (IUPAC 2021 abridged values).
            pub const fn molar_mass(self) -> f64 {
                match self { $(Element::$name => $mass * 1e-3,)+ }
            }
        }
    };
}

elements! {
    C 12.011, H 1.008, O 15.999, N 14.007, S 32.06, Ar 39.95, He 4.0026, Ne 20.180, Kr 83.798,
    Xe 131.29, Cl 35.45, F 18.998, Na 22.990, K 39.098, Ca 40.078, Mg 24.305, Fe 55.845,
    Al 26.982, Si 28.085, P 30.974,
}

/// Moles of each element, indexed by `Element as usize`.
pub type Elements = [f64; Element::COUNT];

impl Element {
    /// The element with this symbol.
    pub fn from_symbol(symbol: &str) -> Option<Element> {
        Self::ALL.iter().copied().find(|e| e.symbol() == symbol)
    }
}
