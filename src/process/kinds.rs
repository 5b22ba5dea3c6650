//! Component kinds and their ports, declared once. The reader, the rules and the catalogue draw
//! from this table.

/// What a port takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stuff {
    /// Material.
    Material,
    /// Heat or radiation.
    Heat,
    /// Shaft or electric work.
    Work,
}

/// Direction of a port.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// Into the component.
    In,
    /// Out of the component.
    Out,
}

/// One port of a kind: how many flows of that stuff and direction it takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Port {
    /// What it takes.
    pub stuff: Stuff,
    /// Direction.
    pub direction: Direction,
    /// Fewest flows.
    pub min: usize,
    /// Most flows.
    pub max: usize,
}

/// How the material flows of a kind are sorted into conserved sets.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sorting {
    /// All material is one set.
    Single,
    /// One set a side; named or inferred.
    Sides,
    /// Substances meet and may react: one pool, except fluids that pass through unchanged.
    Pool,
}

/// How a kind's fuel and product are defined.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Purposeful {
    /// Work is spent to raise the exergy of material.
    Compression,
    /// Exergy of material is spent to deliver work.
    Expansion,
    /// Heat is exchanged between sides.
    Exchange,
    /// Fuel is burnt to heat gas.
    Combustion,
    /// Fuel is burnt to heat another side.
    Firing,
    /// Work is converted into work.
    Conversion,
    /// Streams are brought together.
    Mixing,
    /// One state is divided.
    Dividing,
    /// Nothing useful comes of it by itself.
    Dissipation,
    /// Heat is turned into work.
    Engine,
    /// Work or heat moves heat.
    HeatMover,
    /// Chemical exergy is made or separated.
    Chemistry,
    /// A motive stream lifts a suction stream.
    Ejection,
    /// Electric work heats.
    ElectricHeating,
    /// Only the user can say.
    Declared,
}

/// A kind of component.
#[derive(Clone, Copy, Debug)]
pub struct KindInfo {
    /// Name as in the description.
    pub name: &'static str,
    /// What it is, in one sentence.
    pub doc: &'static str,
    /// Its ports.
    pub ports: &'static [Port],
    /// How its material is sorted.
    pub sorting: Sorting,
    /// Its purpose.
    pub purpose: Purposeful,
    /// Which `given` members it takes.
    pub given: &'static [&'static str],
    /// Names of roles that `ports` may assign.
    pub roles: &'static [&'static str],
}

const ANY: usize = usize::MAX;

const fn port(stuff: Stuff, direction: Direction, min: usize, max: usize) -> Port {
    Port { stuff, direction, min, max }
}
const fn material_in(min: usize, max: usize) -> Port {
    port(Stuff::Material, Direction::In, min, max)
}
const fn material_out(min: usize, max: usize) -> Port {
    port(Stuff::Material, Direction::Out, min, max)
}
const fn heat_in(min: usize, max: usize) -> Port {
    port(Stuff::Heat, Direction::In, min, max)
}
const fn heat_out(min: usize, max: usize) -> Port {
    port(Stuff::Heat, Direction::Out, min, max)
}
const fn work_in(min: usize, max: usize) -> Port {
    port(Stuff::Work, Direction::In, min, max)
}
const fn work_out(min: usize, max: usize) -> Port {
    port(Stuff::Work, Direction::Out, min, max)
}

macro_rules! kinds {
    ($($variant:ident $name:literal $doc:literal {
        ports: [$($port:expr),* $(,)?],
        sorting: $sorting:ident,
        purpose: $purpose:ident,
        given: [$($given:literal),* $(,)?],
        roles: [$($role:literal),* $(,)?] $(,)?
    })+) => {
        /// A kind of component.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
        pub enum Kind { $(#[doc = $doc] $variant,)+ }

        impl Kind {
            /// Every kind.
            pub const ALL: &'static [Kind] = &[$(Kind::$variant),+];

            /// What the table says of the kind.
            pub const fn info(self) -> &'static KindInfo {
                match self {
                    $(Kind::$variant => {
                        const INFO: KindInfo = KindInfo {
                            name: $name,
                            doc: $doc,
                            ports: &[$($port),*],
                            sorting: Sorting::$sorting,
                            purpose: Purposeful::$purpose,
                            given: &[$($given),*],
                            roles: &[$($role),*],
                        };
                        &INFO
                    })+
                }
            }
        }

        /// Kind names with their docs, for the reader and the schema.
        pub const WORDS: &[(&str, &str)] = &[$(($name, $doc)),+];
    };
}

kinds! {
    Valve "valve" "A throttle: pressure falls, no work, normally no heat." {
        ports: [material_in(1, 1), material_out(1, 1), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Dissipation, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Pipe "pipe" "A duct between two measured ends." {
        ports: [material_in(1, 1), material_out(1, 1), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Dissipation, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Turbine "turbine" "An expander that delivers work; several outlets are extractions." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_out(0, ANY), work_in(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Expansion, given: ["isentropic_efficiency", "mechanical_loss", "heat_loss"], roles: [],
    }
    Compressor "compressor" "Work raises the pressure of a gas; cooling flows may pass through." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: Compression, given: ["isentropic_efficiency", "mechanical_loss", "heat_loss"], roles: [],
    }
    Pump "pump" "Work raises the pressure of a liquid." {
        ports: [material_in(1, 1), material_out(1, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Compression, given: ["isentropic_efficiency", "mechanical_loss", "heat_loss"], roles: [],
    }
    Fan "fan" "Work moves a gas against a small pressure difference." {
        ports: [material_in(1, 1), material_out(1, 1), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Compression, given: ["isentropic_efficiency", "mechanical_loss", "heat_loss"], roles: [],
    }
    Mixer "mixer" "Streams join without work." {
        ports: [material_in(1, ANY), material_out(1, 1), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Mixing, given: ["heat_loss"], roles: [],
    }
    Splitter "splitter" "One stream is divided into several of the same state." {
        ports: [material_in(1, 1), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Dividing, given: ["heat_loss"], roles: [],
    }
    Separator "separator" "A two-phase stream is divided into liquid and vapour." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Dividing, given: ["heat_loss"], roles: [],
    }
    Drum "drum" "A vessel with liquid and vapour in equilibrium, fed and drawn from." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Mixing, given: ["heat_loss"], roles: [],
    }
    Deaerator "deaerator" "Feedwater is heated by direct contact with steam; a vent is a loss." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Mixing, given: ["heat_loss"], roles: [],
    }
    HeatExchanger "heat_exchanger" "Heat passes between sides that keep their substance apart." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: Exchange, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Condenser "condenser" "Vapour is condensed against a coolant." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: Dissipation, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Evaporator "evaporator" "Liquid is evaporated by a warmer side." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: Exchange, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Hrsg "hrsg" "Hot gas raises steam at one or more pressures." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: Exchange, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Heater "heater" "Electric work heats a stream or gives off heat." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: ElectricHeating, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Combustor "combustor" "Fuel burns with an oxidant." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Combustion, given: ["heat_loss", "pressure_loss"], roles: ["fuel", "oxidant"],
    }
    Boiler "boiler" "Fuel burns and heats water or another fluid." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_in(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Firing, given: ["heat_loss"], roles: ["fuel", "oxidant"],
    }
    Reactor "reactor" "Substances react to given products." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_in(0, ANY), work_out(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Chemistry, given: ["heat_loss", "pressure_loss"], roles: [],
    }
    Engine "engine" "Fuel burns inside and delivers work, exhaust and heat." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_out(0, ANY), work_in(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Expansion, given: ["heat_loss"], roles: ["fuel", "oxidant"],
    }
    Generator "generator" "Shaft work becomes electric work." {
        ports: [work_in(1, ANY), work_out(1, ANY), heat_in(0, 0), heat_out(0, ANY), material_in(0, 0), material_out(0, 0)],
        sorting: Single, purpose: Conversion, given: ["efficiency", "heat_loss"], roles: [],
    }
    Motor "motor" "Electric work becomes shaft work." {
        ports: [work_in(1, ANY), work_out(1, ANY), heat_in(0, 0), heat_out(0, ANY), material_in(0, 0), material_out(0, 0)],
        sorting: Single, purpose: Conversion, given: ["efficiency", "heat_loss"], roles: [],
    }
    Gearbox "gearbox" "Shaft work changes speed." {
        ports: [work_in(1, ANY), work_out(1, ANY), heat_in(0, 0), heat_out(0, ANY), material_in(0, 0), material_out(0, 0)],
        sorting: Single, purpose: Conversion, given: ["efficiency", "heat_loss"], roles: [],
    }
    Shaft "shaft" "Shaft work is gathered and divided." {
        ports: [work_in(1, ANY), work_out(1, ANY), heat_in(0, 0), heat_out(0, ANY), material_in(0, 0), material_out(0, 0)],
        sorting: Single, purpose: Conversion, given: ["efficiency", "heat_loss"], roles: [],
    }
    HeatEngine "heat_engine" "A cyclic device that turns heat into work." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_out(0, ANY), work_in(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: Engine, given: ["efficiency", "heat_loss"], roles: [],
    }
    Refrigerator "refrigerator" "A cyclic device that takes heat from a cold body at the cost of work." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: HeatMover, given: ["cop", "heat_loss"], roles: [],
    }
    HeatPump "heat_pump" "A cyclic device that delivers heat to a warm body at the cost of work." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: HeatMover, given: ["cop", "heat_loss"], roles: [],
    }
    AbsorptionMachine "absorption_machine" "A cyclic device that moves heat at the cost of heat." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Sides, purpose: HeatMover, given: ["cop", "heat_loss"], roles: ["driving", "cooled", "rejected"],
    }
    Ejector "ejector" "A motive stream entrains and lifts a suction stream." {
        ports: [material_in(2, ANY), material_out(1, 1), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Single, purpose: Ejection, given: ["heat_loss"], roles: ["motive", "suction"],
    }
    CoolingTower "cooling_tower" "Water is cooled by evaporation into air." {
        ports: [material_in(2, ANY), material_out(2, ANY), work_in(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Dissipation, given: ["heat_loss"], roles: [],
    }
    CoolingCoil "cooling_coil" "Air is cooled, and may be dried, by a colder side." {
        ports: [material_in(1, ANY), material_out(1, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Exchange, given: ["heat_loss"], roles: [],
    }
    FuelCell "fuel_cell" "Fuel and oxidant react and deliver electric work." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_out(0, ANY), work_in(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Chemistry, given: ["heat_loss"], roles: ["fuel", "oxidant"],
    }
    Electrolyser "electrolyser" "Electric work splits a substance." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_in(0, ANY), work_out(0, 0), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Chemistry, given: ["heat_loss"], roles: [],
    }
    Separation "separation" "A mixture is divided into parts of other composition." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_in(0, ANY), work_out(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Chemistry, given: ["heat_loss"], roles: [],
    }
    Dryer "dryer" "Moisture passes from a solid into air or vapour; the dry solid and its water are flows of their own." {
        ports: [material_in(1, ANY), material_out(1, ANY), work_in(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Dissipation, given: ["heat_loss"], roles: [],
    }
    Storage "storage" "A vessel that is filled, emptied, heated or cooled." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_in(0, ANY), work_out(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Declared, given: ["heat_loss"], roles: [],
    }
    ControlVolume "control_volume" "Any region with a closed boundary." {
        ports: [material_in(0, ANY), material_out(0, ANY), work_in(0, ANY), work_out(0, ANY), heat_in(0, ANY), heat_out(0, ANY)],
        sorting: Pool, purpose: Declared, given: ["heat_loss", "pressure_loss"], roles: [],
    }
}

impl Kind {
    /// The kind with this name.
    pub fn from_name(name: &str) -> Option<Kind> {
        Self::ALL.iter().copied().find(|k| k.info().name == name)
    }

    /// Name as in the description.
    pub const fn name(self) -> &'static str {
        self.info().name
    }

    /// Whether the kind is an exchanger whose interior has a temperature profile.
    pub const fn is_exchanger(self) -> bool {
        matches!(self, Kind::HeatExchanger | Kind::Condenser | Kind::Evaporator | Kind::Hrsg)
    }
}
