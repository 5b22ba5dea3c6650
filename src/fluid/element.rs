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
            /// Standard atomic mass, kg/mol (IUPAC 1995 values, which NASA/TP-2002-211556 uses: the
            /// mass of each of its species is the sum over its atoms, so mass and elements agree).
            pub const fn molar_mass(self) -> f64 {
                match self { $(Element::$name => $mass * 1e-3,)+ }
            }
        }
    };
}

elements! {
    C 12.0107, H 1.00794, O 15.9994, N 14.0067, S 32.065, Ar 39.948, He 4.002602, Ne 20.1797,
    Kr 83.798, Xe 131.293, Cl 35.453, F 18.9984032, Na 22.98977, K 39.0983, Ca 40.078, Mg 24.305,
    Fe 55.845, Al 26.981538, Si 28.0855, P 30.973761,
}

/// Moles of each element, indexed by `Element as usize`.
pub type Elements = [f64; Element::COUNT];

impl Element {
    /// The element with this symbol.
    pub fn from_symbol(symbol: &str) -> Option<Element> {
        Self::ALL.iter().copied().find(|e| e.symbol() == symbol)
    }
}
