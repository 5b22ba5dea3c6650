use super::*;
use crate::diagnostic::{Code, Diagnostic};
use crate::quantity::{Bounds, Dimension, How, Reference, read_text};

const LIMITS: Limits = Limits {
    depth: 32,
    key_bytes: 64,
    string_bytes: 1024,
    free_keys: &["tags", "readings"],
    free_key_chars: 128,
};

/// A small description of a shop for ice, to try the shapes on.
static TANK: ObjectShape = ObjectShape {
    name: "Tank",
    doc: "A tank of brine.",
    fields: &[
        &[
            Field::required("volume", Shape::Quantity(Dimension::Volume), "Filled volume."),
            Field::optional("temperature", Shape::Quantities(Dimension::Temperature), "Of the brine."),
        ],
        COMMON,
    ],
};
static MAKER: ObjectShape = ObjectShape {
    name: "Maker",
    doc: "An ice maker.",
    fields: &[
        &[
            Field::required("power", Shape::Quantity(Dimension::Power), "Shaft power."),
            Field::optional("cop", Shape::Quantity(Dimension::Fraction), "Cold over power."),
            Field::optional(
                "surface",
                Shape::OneOf(&[Shape::Quantities(Dimension::Temperature), Shape::Object(&GLIDE)]),
                "Of the cold side.",
            ),
            Field::optional("feeds", Shape::OneOf(&[Shape::Name, Shape::Object(&FEED)]), "What it feeds."),
        ],
        COMMON,
    ],
};
static FEED: ObjectShape = ObjectShape {
    name: "Feed",
    doc: "A feed.",
    fields: &[&[Field::required("to", Shape::Name, "Where it goes.")]],
};
static GLIDE: ObjectShape = ObjectShape {
    name: "Glide",
    doc: "A stream of constant heat capacity.",
    fields: &[&[
        Field::required("inlet", Shape::Quantity(Dimension::Temperature), "At the inlet."),
        Field::required("outlet", Shape::Quantity(Dimension::Temperature), "At the outlet."),
    ]],
};
const COMMON: &[Field] = &[Field::optional(
    "mode",
    Shape::Choice(&[("on", "Running."), ("standby", "Waiting.")]),
    "How it is operated.",
)];
static MACHINE: Union = Union {
    name: "Machine",
    doc: "What stands in the shop.",
    member: "kind",
    variants: &[Variant { word: "tank", shape: &TANK }, Variant { word: "ice_maker", shape: &MAKER }],
};
static SHOP: ObjectShape = ObjectShape {
    name: "Shop",
    doc: "An ice shop.",
    fields: &[&[
        Field::required(
            "machines",
            Shape::Map { key: Key::Name("a machine"), value: &Shape::Tagged(&MACHINE) },
            "By name.",
        ),
        Field::optional(
            "tags",
            Shape::Map { key: Key::Text("a tag"), value: &Shape::Object(&TAG) },
            "By name.",
        ),
        Field::optional("hours", Shape::List { item: &Shape::Integer, max: 3 }, "Open at."),
        Field::optional("open", Shape::Boolean, "Whether it is open."),
        Field::optional("factor", Shape::Number, "A factor."),
        Field::optional("readings", Shape::Map { key: Key::Text("a tag"), value: &Shape::Any }, "Raw."),
        Field::optional("note", Shape::Text, "A remark."),
    ]],
};
static TAG: ObjectShape = ObjectShape {
    name: "Tag",
    doc: "A tag.",
    fields: &[&[
        Field::required("unit", Shape::Unit, "Its unit."),
        Field::optional("uncertainty", Shape::Uncertainty, "Of each reading."),
        Field::optional("range", Shape::List { item: &Shape::AnyQuantity, max: 2 }, "Lowest and highest."),
    ]],
};

const GOOD: &str = r#"{
  "note": "Harbour \"ice\" \u00e9",
  "open": true, "hours": [8, 12, 17], "factor": 4.80,
  "machines": {
    "brine": {"kind": "tank", "volume": "2 m3", "mode": "on",
              "temperature": ["-9.5 degC", {"tag": "TT 1/2"},
                              {"value": -9.60, "unit": "Cel", "uncertainty": "±0.5 K", "resolution": 0.1, "calibration": "loop-3"}]},
    "m-1": {"kind": "ice_maker", "power": {"value": 12.50, "unit": "kW", "u": 0.3}, "cop": 3.10, "feeds": {"to": "brine"}}
  },
  "tags": {"TT 1/2": {"unit": "degC", "uncertainty": {"instrument": "iec-60751-b"}, "range": ["-10 degC", 600]}},
  "readings": {"TT 1/2": null, "b": "Bad", "c": {"value": 1}}
}"#;

fn faults_of(body: &str) -> Vec<Diagnostic> {
    let mut faults = Faults::new();
    if let Some(tree) = Tree::read(body.as_bytes(), &LIMITS, &mut faults) {
        check(&tree, &SHOP, &mut faults);
    }
    faults.into_vec()
}

#[track_caller]
fn found(body: &str, wanted: &[(Code, &str)]) {
    let faults = faults_of(body);
    let got: Vec<(Code, &str)> = faults.iter().map(|f| (f.code, f.pointer.as_str())).collect();
    assert_eq!(got, wanted, "{faults:#?}");
}

fn with_machine(machine: &str) -> String {
    format!(r#"{{"machines":{{"a":{machine}}}}}"#)
}

#[test]
fn a_good_document_is_read() {
    assert_eq!(faults_of(GOOD), []);
    let mut faults = Faults::new();
    let tree = Tree::read(GOOD.as_bytes(), &LIMITS, &mut faults).unwrap();
    let root = tree.root();
    assert_eq!(root.get("note").unwrap().text(), Some("Harbour \"ice\" é"));
    assert_eq!(root.get("factor").unwrap().number_text(), Some("4.80"));
    assert_eq!(root.get("factor").unwrap().number(), Some(4.8));
    assert_eq!(root.get("open").unwrap().boolean(), Some(true));
    let hours: Vec<i64> = root.get("hours").unwrap().items().filter_map(Node::integer).collect();
    assert_eq!(hours, [8, 12, 17]);
    let names: Vec<&str> = root.members().map(|(name, _)| name).collect();
    assert_eq!(names, ["note", "open", "hours", "factor", "machines", "tags", "readings"]);

    let machines = root.get("machines").unwrap();
    let brine = machines.get("brine").unwrap();
    let readings = brine.get("temperature").unwrap().quantities(Dimension::Temperature, &mut faults);
    let [Reading::Value(first), Reading::Tag { name, pointer }, Reading::Value(third)] = readings.as_slice()
    else {
        panic!("{readings:?}")
    };
    assert_eq!(first.text, "-9.5 degC");
    assert!((first.value - 263.65).abs() < 1e-9 && (first.half_digit - 0.05).abs() < 1e-12);
    assert_eq!(first.pointer, "/machines/brine/temperature/0");
    assert_eq!((name.as_str(), pointer.as_str()), ("TT 1/2", "/machines/brine/temperature/1"));
    assert_eq!(third.number, "-9.60");
    assert_eq!(third.text, "-9.60 Cel");
    assert_eq!(third.calibration.as_deref(), Some("loop-3"));
    assert!((third.half_digit - 0.05).abs() < 1e-12);
    let u = third.uncertainty.unwrap();
    assert_eq!(u.how, How::HalfWidth);
    assert!((u.u - 0.5 / 3_f64.sqrt()).abs() < 1e-12);

    let power = machines.get("m-1").unwrap().get("power").unwrap();
    let power = power.quantity(Dimension::Power, &mut faults).unwrap();
    assert_eq!((power.value, power.u(), power.number.as_str()), (12_500.0, Some(300.0), "12.50"));
    assert_eq!(power.half_digit, 5.0);
    assert_eq!(
        brine.get("volume").unwrap().quantity(Dimension::Volume, &mut faults).unwrap().reference(),
        Reference::Actual
    );

    let tag = root.get("tags").unwrap().get("TT 1/2").unwrap();
    assert_eq!(tag.pointer(), "/tags/TT 1~12");
    assert_eq!(tag.pointer_to("max/age"), "/tags/TT 1~12/max~1age");
    let scale = tag.get("unit").unwrap().unit(Dimension::Temperature, &mut faults).unwrap();
    let spread =
        tag.get("uncertainty").unwrap().uncertainty(Dimension::Temperature, &scale, &mut faults).unwrap();
    assert!((spread.at(273.15).u - 0.3 / 3_f64.sqrt()).abs() < 1e-12);
    assert!(faults.is_empty(), "{faults:?}");
}

#[test]
fn what_is_not_json_says_where() {
    for (body, place) in [
        ("", "empty"),
        ("  \n ", "empty"),
        ("{\"a\": 1,\n \"b\" 2}", "line 2 column 6"),
        ("{\"a\": 1,}", "line 1 column 9"),
        ("[1, 2", "line 1 column 5"),
        ("{\"a\": NaN}", "line 1 column 7"),
        ("{} {}", "line 1 column 4"),
        ("{\"a\": \"\u{1}\"}", "line 1"),
        ("{\"a\": 01}", "line 1"),
        ("\u{feff}{}", "line 1"),
    ] {
        let faults = faults_of(body);
        assert_eq!(faults.len(), 1, "{body}");
        assert_eq!(faults[0].code, Code::NotJson);
        assert!(faults[0].message.contains(place), "{body}: {}", faults[0].message);
    }
    let mut faults = Faults::new();
    assert!(Tree::read(b"{\n\"a\": \"\xff\"}", &LIMITS, &mut faults).is_none());
    assert!(faults.as_slice()[0].message.contains("line 2 column 7"), "{faults:?}");
    found(r#"{"machines":{},"note":"\ud800"}"#, &[(Code::NotJson, "/note")]);
    found(r#"{"machines":{},"\ud800":1}"#, &[(Code::NotJson, "")]);
}

#[test]
fn structure_faults_are_located_and_the_walk_goes_on() {
    found(
        r#"{"machines":{"a":{"kind":"tank","volume":"1 m3","volume":"2 m3"}},"hours":["x"],"\u006eote":"","note":""}"#,
        &[
            (Code::DuplicateKey, "/machines/a/volume"),
            (Code::DuplicateKey, "/note"),
            (Code::WrongType, "/hours/0"),
        ],
    );
    let long = "k".repeat(65);
    let faults =
        faults_of(&format!(r#"{{"machines":{{}},"{long}":{{"a":1,"a":2}},"note":"{}"}}"#, "é".repeat(513)));
    let codes: Vec<Code> = faults.iter().map(|f| f.code).collect();
    assert_eq!(codes, [Code::LimitExceeded, Code::DuplicateKey, Code::LimitExceeded]);
    assert_eq!(faults[2].pointer, "/note");
    let tag = "é".repeat(128);
    found(&format!(r#"{{"machines":{{}},"tags":{{"{tag}":{{"unit":"K"}}}}}}"#), &[]);
    found(
        &format!(r#"{{"machines":{{}},"tags":{{"{tag}x":{{"unit":"K"}}}}}}"#),
        &[(Code::LimitExceeded, "/tags")],
    );
    // Many members take the other way of finding duplicates.
    let many: Vec<String> = (0..40).map(|i| format!(r#""m{i}":{{"kind":"tank","volume":"1 m3"}}"#)).collect();
    found(
        &format!(r#"{{"machines":{{{},"m3":null,"m39":null}}}}"#, many.join(",")),
        &[(Code::DuplicateKey, "/machines/m3"), (Code::DuplicateKey, "/machines/m39")],
    );
}

#[test]
fn depth_is_limited_without_recursion() {
    let nest = |n: usize| format!("{}{}", "[".repeat(n), "]".repeat(n));
    let mut faults = Faults::new();
    Tree::read(nest(32).as_bytes(), &LIMITS, &mut faults).unwrap();
    assert!(faults.is_empty());
    Tree::read(nest(33).as_bytes(), &LIMITS, &mut faults).unwrap();
    assert_eq!(faults.as_slice()[0].code, Code::TooDeep);
    assert_eq!(faults.as_slice()[0].pointer, "/0".repeat(32));
    for limit in [32, usize::MAX] {
        let mut faults = Faults::new();
        let limits = Limits { depth: limit, ..LIMITS };
        Tree::read(nest(100_000).as_bytes(), &limits, &mut faults).unwrap();
        assert_eq!(faults.into_vec().len(), 1);
        let mut faults = Faults::new();
        assert!(Tree::read("[".repeat(100_000).as_bytes(), &limits, &mut faults).is_none());
        let objects = format!("{}1{}", "{\"a\":[".repeat(50_000), "]}".repeat(50_000));
        Tree::read(objects.as_bytes(), &limits, &mut faults).unwrap();
    }
    found(
        &with_machine(&nest(60)),
        &[(Code::TooDeep, &format!("/machines/a{}", "/0".repeat(30))), (Code::WrongType, "/machines/a")],
    );
}

#[test]
fn large_bodies_are_read_and_faults_are_capped() {
    let items = "{\"x\":1,\"x\":2},".repeat(700_000);
    let body = format!("[{items}0]");
    assert!(body.len() > 9_000_000);
    let mut faults = Faults::new();
    let tree = Tree::read(body.as_bytes(), &LIMITS, &mut faults).unwrap();
    assert_eq!(tree.root().items().len(), 700_001);
    let faults = faults.into_vec();
    assert_eq!(faults.len(), FAULT_LIMIT + 1);
    assert_eq!(faults[FAULT_LIMIT].code, Code::LimitExceeded);
    assert_eq!(faults[99].pointer, "/99/x");

    let bad: Vec<String> = (0..150).map(|i| format!(r#""m{i}":{{"kind":"tank"}}"#)).collect();
    assert_eq!(faults_of(&format!(r#"{{"machines":{{{}}}}}"#, bad.join(","))).len(), FAULT_LIMIT + 1);
    // Exactly at the limit nothing was cut, and nothing says so.
    assert_eq!(faults_of(&format!(r#"{{"machines":{{{}}}}}"#, bad[..100].join(","))).len(), FAULT_LIMIT);
}

#[test]
fn every_fault_of_a_walk_is_found_at_once() {
    found(
        r#"{
          "machines": {
            "bad name": {"kind": "tank", "volume": "2 m3"},
            "a": {"kind": "tnak"},
            "b": {"volume": "1 m3"},
            "c": {"kind": "ice_maker", "power": 5, "cop": "3 kW", "feeds": "no name", "moode": "on"},
            "d": {"kind": "ice_maker", "mode": "of", "feeds": 5},
            "e": {"kind": 7},
            "f": null,
            "g": {"kind": "ice_maker", "power": "1 kW", "feeds": {"from": "x"}}
          },
          "hours": [1, 2.5, 3, 4], "open": "yes", "factor": 1e999, "note": 1,
          "tags": {"": {"unit": "degX", "uncertainty": [], "range": ["1 foo", true]}}
        }"#,
        &[
            (Code::BadName, "/machines/bad name"),
            (Code::UnknownChoice, "/machines/a/kind"),
            (Code::MissingField, "/machines/b"),
            (Code::BareNumber, "/machines/c/power"),
            (Code::WrongDimension, "/machines/c/cop"),
            (Code::BadName, "/machines/c/feeds"),
            (Code::UnknownField, "/machines/c/moode"),
            (Code::UnknownChoice, "/machines/d/mode"),
            (Code::WrongType, "/machines/d/feeds"),
            (Code::MissingField, "/machines/d"),
            (Code::WrongType, "/machines/e/kind"),
            (Code::WrongType, "/machines/f"),
            (Code::UnknownField, "/machines/g/feeds/from"),
            (Code::MissingField, "/machines/g/feeds"),
            (Code::LimitExceeded, "/hours"),
            (Code::WrongType, "/hours/1"),
            (Code::WrongType, "/open"),
            (Code::BadNumber, "/factor"),
            (Code::WrongType, "/note"),
            (Code::BadName, "/tags/"),
            (Code::UnknownUnit, "/tags//unit"),
            (Code::WrongType, "/tags//uncertainty"),
            (Code::UnknownUnit, "/tags//range/0"),
            (Code::WrongType, "/tags//range/1"),
        ],
    );
    found("[]", &[(Code::WrongType, "")]);
    let hint = |body: &str| faults_of(body)[0].hint.clone().unwrap_or_default().into_owned();
    assert!(hint(&with_machine(r#"{"kind":"tnak"}"#)).contains("\"tank\""));
    assert!(hint(&with_machine(r#"{"kind":"tank","volume":"1 m3","moode":"on"}"#)).contains("\"mode\""));
    assert!(hint(&with_machine(r#"{"kind":"tank","volume":null}"#)).contains("leave"));
}

#[test]
fn quantity_objects_are_checked_in_every_member() {
    let power = |object: &str| with_machine(&format!(r#"{{"kind":"ice_maker","power":{object}}}"#));
    let at = "/machines/a/power";
    let one =
        |object: &str, code: Code, member: &str| found(&power(object), &[(code, &format!("{at}{member}"))]);
    one(r#"{"unit":"kW"}"#, Code::MissingField, "");
    one(r#"{"value":1}"#, Code::BareNumber, "/value");
    one(r#"{"value":"1 kW"}"#, Code::WrongType, "/value");
    one(r#"{"value":1,"unit":"kg"}"#, Code::WrongDimension, "/unit");
    one(r#"{"value":1,"unit":"kX"}"#, Code::UnknownUnit, "/unit");
    one(r#"{"value":1,"unit":5}"#, Code::WrongType, "/unit");
    one(r#"{"value":1e999,"unit":"kW"}"#, Code::BadNumber, "/value");
    one(r#"{"value":1,"unit":"kW","uncertanty":"1 %"}"#, Code::UnknownField, "/uncertanty");
    one(r#"{"value":1,"unit":"kW","uncertainty":"1 K"}"#, Code::WrongDimension, "/uncertainty");
    one(r#"{"value":1,"unit":"kW","uncertainty":"-1 kW"}"#, Code::BadUncertainty, "/uncertainty");
    one(r#"{"value":1,"unit":"kW","uncertainty":0.5}"#, Code::BareNumber, "/uncertainty");
    one(r#"{"value":1,"unit":"kW","uncertainty":{}}"#, Code::BadUncertainty, "/uncertainty");
    one(r#"{"value":1,"unit":"kW","uncertainty":{"expanded":"1 kW"}}"#, Code::MissingField, "/uncertainty");
    one(
        r#"{"value":1,"unit":"kW","uncertainty":{"expanded":"1 kW","half_width":"1 kW","coverage_factor":2}}"#,
        Code::BadUncertainty,
        "/uncertainty",
    );
    one(
        r#"{"value":1,"unit":"kW","uncertainty":{"half_width":"1 kW","coverage_factor":2}}"#,
        Code::Conflict,
        "/uncertainty/coverage_factor",
    );
    one(
        r#"{"value":1,"unit":"kW","uncertainty":{"expanded":"1 kW","coverage_factor":-2}}"#,
        Code::BadUncertainty,
        "/uncertainty",
    );
    one(r#"{"value":1,"unit":"kW","u":"0.5"}"#, Code::WrongType, "/u");
    one(r#"{"value":1,"unit":"kW","u":-0.5}"#, Code::BadUncertainty, "/u");
    one(r#"{"value":1,"unit":"kW","u":0.5,"uncertainty":"1 %"}"#, Code::Conflict, "/u");
    one(r#"{"value":1,"unit":"kW","resolution":-1}"#, Code::OutOfBounds, "/resolution");
    one(r#"{"value":1,"unit":"kW","resolution":"1 K"}"#, Code::WrongDimension, "/resolution");
    one(r#"{"value":1,"unit":"kW","calibration":"a b"}"#, Code::BadName, "/calibration");
    one(r#"{"tag":"T"}"#, Code::WrongType, "");
    one("[\"1 kW\"]", Code::WrongType, "");
    found(
        &power(
            r#"{"value":1,"unit":"kW","uncertainty":{"expanded":"2 %","coverage_factor":2},"resolution":"10 W"}"#,
        ),
        &[],
    );
    found(&power(r#"{"value":1,"unit":"kW","u":0}"#), &[]);

    let tank = |temperature: &str| {
        with_machine(&format!(r#"{{"kind":"tank","volume":"1 m3","temperature":{temperature}}}"#))
    };
    found(&tank(r#"{"tag":"T"}"#), &[]);
    found(&tank("[]"), &[(Code::BadQuantity, "/machines/a/temperature")]);
    found(&tank(r#"{"tag":""}"#), &[(Code::BadName, "/machines/a/temperature/tag")]);
    found(&tank(r#"{"tag":"T","unit":"K"}"#), &[(Code::UnknownField, "/machines/a/temperature/unit")]);
    found(
        &tank(r#"["0 K",{"tag":5},["1 K"]]"#),
        &[
            (Code::BelowAbsoluteZero, "/machines/a/temperature/0"),
            (Code::WrongType, "/machines/a/temperature/1/tag"),
            (Code::WrongType, "/machines/a/temperature/2"),
        ],
    );
}

#[test]
fn alternatives_that_are_objects_are_told_apart_by_their_members() {
    let surface =
        |json: &str| with_machine(&format!(r#"{{"kind":"ice_maker","power":"1 kW","surface":{json}}}"#));
    let at = "/machines/a/surface";
    found(&surface("\"-5 degC\""), &[]);
    found(&surface(r#"{"value":268,"unit":"K"}"#), &[]);
    found(&surface(r#"{"tag":"T"}"#), &[]);
    found(&surface(r#"["-5 degC",{"tag":"T"}]"#), &[]);
    found(&surface(r#"{"inlet":"-2 degC","outlet":"-6 degC"}"#), &[]);
    found(&surface(r#"{"inlet":"-2 degC"}"#), &[(Code::MissingField, at)]);
    found(&surface(r#"{"inlet":"-2 degC","outlet":"-6"}"#), &[(Code::BareNumber, &format!("{at}/outlet"))]);
    found(&surface(r#"{"value":268}"#), &[(Code::BareNumber, &format!("{at}/value"))]);
    found(&surface("true"), &[(Code::WrongType, at)]);
}

#[test]
fn a_reported_figure_can_be_pasted_back() {
    let body = br#"{"value":1.2,"unit":"kJ/(kg K)","u":0.01}"#;
    let mut faults = Faults::new();
    let tree = Tree::read(body, &LIMITS, &mut faults).unwrap();
    let figure = tree.root().quantity(Dimension::SpecificEntropy, &mut faults).unwrap();
    assert_eq!((figure.value, figure.u()), (1200.0, Some(10.0)));
    assert_eq!(figure.uncertainty.unwrap().how, How::Reported);
    let tree = Tree::read(br#""0 bar""#, &LIMITS, &mut faults).unwrap();
    assert_eq!(tree.root().bound(Dimension::Pressure, &mut faults).unwrap().value, 0.0);
}

#[test]
fn the_canonical_form_keeps_order_and_text() {
    assert_eq!(
        canonical("{ \"b\" : 4.80 ,\n\t\"a\": [ 1e3, \" x \\\" y \" ]\r\n}"),
        r#"{"b":4.80,"a":[1e3," x \" y "]}"#
    );
    assert_eq!(canonical(GOOD), canonical(&canonical(GOOD)));
    // FIPS 180-4, example of one block.
    assert_eq!(sha256_hex(b"abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
}

#[test]
fn the_schema_is_drawn_from_the_shapes() {
    let schemas = json_schema(&SHOP);
    assert_eq!(clashing_names(&[&SHOP]), Vec::<String>::new());
    for name in [
        "Shop",
        "Machine",
        "MachineTank",
        "MachineIceMaker",
        "Feed",
        "Tag",
        "QuantityPower",
        "QuantitiesTemperature",
        "QuantityTemperature",
        "QuantityObject",
        "PlainQuantityObject",
        "Uncertainty",
        "TagReference",
    ] {
        assert!(schemas[name].is_object(), "{name}");
    }
    assert_eq!(schemas["MachineTank"]["properties"]["kind"]["enum"], serde_json::json!(["tank"]));
    assert_eq!(schemas["MachineTank"]["required"], serde_json::json!(["kind", "volume"]));
    assert_eq!(schemas["MachineTank"]["additionalProperties"], serde_json::json!(false));
    assert_eq!(
        schemas["Machine"]["discriminator"]["mapping"]["ice_maker"],
        "#/components/schemas/MachineIceMaker"
    );
    // Every reference leads somewhere, and every component is referred to.
    let text = schemas.to_string();
    let mut referred = std::collections::BTreeSet::from(["Shop"]);
    for part in text.split("\"#/components/schemas/").skip(1) {
        let name = part.split('"').next().unwrap();
        assert!(schemas[name].is_object(), "{name}");
        referred.insert(name);
    }
    assert_eq!(referred.len(), schemas.as_object().unwrap().len());
    // Two objects of one name are noticed.
    static OTHER: ObjectShape = ObjectShape { name: "Feed", doc: "Another.", fields: &[] };
    assert_eq!(clashing_names(&[&SHOP, &OTHER]), ["Feed"]);
}

/// A small generator (xorshift64*, Vigna 2016) with a fixed seed.
struct Random(u64);

impl Random {
    fn below(&mut self, n: usize) -> usize {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        usize::try_from(self.0.wrapping_mul(0x2545_F491_4F6C_DD1D) % n as u64).unwrap()
    }

    fn space(&mut self) -> &'static str {
        ["", "", " ", "\n", "\t "][self.below(5)]
    }

    /// A random JSON text with random white space.
    fn json(&mut self, depth: usize) -> String {
        let (a, b) = (self.space(), self.space());
        let inner = match self.below(if depth == 0 { 5 } else { 7 }) {
            0 => "null".to_owned(),
            1 => "true".to_owned(),
            2 => "false".to_owned(),
            3 => ["0", "-1.50", "4.80e+3", "1E9", "0.1", "123456789012345678901234567890"][self.below(6)]
                .to_owned(),
            4 => ["\"\"", "\"a b\"", "\"\\u00e9\\n\"", "\"[{,\\\"\"", "\"é🔥\"", "\"\\\\\""][self.below(6)]
                .to_owned(),
            5 => {
                let items: Vec<String> = (0..self.below(5)).map(|_| self.json(depth - 1)).collect();
                format!("[{}{}]", self.space(), items.join(","))
            }
            _ => {
                let keys = ["\"a\"", "\"b/c\"", "\"~\"", "\"\\u00e9\"", "\"\""];
                let count = self.below(6);
                let members: Vec<String> = keys
                    .iter()
                    .take(count)
                    .map(|key| format!("{}{key}{}:{}", self.space(), self.space(), self.json(depth - 1)))
                    .collect();
                format!("{{{}{}}}", self.space(), members.join(","))
            }
        };
        format!("{a}{inner}{b}")
    }
}

/// What the tree says, written out again by its accessors.
fn written(node: Node<'_>) -> serde_json::Value {
    match node.json_type().unwrap() {
        JsonType::Null => serde_json::Value::Null,
        JsonType::Boolean => node.boolean().into(),
        JsonType::Number => serde_json::from_str(node.number_text().unwrap()).unwrap(),
        JsonType::Text => node.text().unwrap().into(),
        JsonType::List => node.items().map(written).collect(),
        JsonType::Object => node.members().map(|(k, v)| (k.to_owned(), written(v))).collect(),
    }
}

fn every_pointer_leads_back(node: Node<'_>, whole: &serde_json::Value) {
    assert_eq!(whole.pointer(&node.pointer()), Some(&written(node)), "{node:?}");
    node.items()
        .chain(node.members().map(|(_, v)| v))
        .for_each(|child| every_pointer_leads_back(child, whole));
}

#[test]
fn random_documents_agree_with_an_ordinary_reader() {
    let mut random = Random(0x5eed_0003);
    for _ in 0..2_000 {
        let text = random.json(4);
        let whole: serde_json::Value = serde_json::from_str(&text).unwrap();
        let mut faults = Faults::new();
        let tree = Tree::read(text.as_bytes(), &LIMITS, &mut faults).unwrap();
        assert!(faults.is_empty(), "{text}: {faults:?}");
        assert_eq!(written(tree.root()), whole, "{text}");
        every_pointer_leads_back(tree.root(), &whole);
        let short = canonical(&text);
        assert_eq!(serde_json::from_str::<serde_json::Value>(&short).unwrap(), whole);
        assert_eq!(canonical(&short), short);
        assert_eq!(tree.root().source(), text.trim_matches([' ', '\t', '\n']));
    }
}

#[test]
fn no_damaged_document_makes_the_reader_panic() {
    let mut random = Random(0x5eed_0004);
    let junk = b"{}[]\",:\\0e-.\xff\x00 tfnu\xc3";
    for _ in 0..20_000 {
        let mut body = GOOD.as_bytes().to_vec();
        for _ in 0..=random.below(3) {
            let at = random.below(body.len());
            match random.below(4) {
                0 => body[at] = junk[random.below(junk.len())],
                1 => body.insert(at, junk[random.below(junk.len())]),
                2 => {
                    body.remove(at);
                }
                _ => {
                    let to = (at + random.below(40)).min(body.len());
                    let part = body[at..to].to_vec();
                    let into = random.below(body.len());
                    body.splice(into..into, part);
                }
            }
        }
        let mut faults = Faults::new();
        if let Some(tree) = Tree::read(&body, &LIMITS, &mut faults) {
            check(&tree, &SHOP, &mut faults);
            canonical(tree.text());
        } else {
            assert!(!faults.is_empty());
        }
    }
}

#[test]
fn a_number_means_the_same_as_text_and_as_member() {
    let mut random = Random(0x5eed_0005);
    for _ in 0..500 {
        let number = format!("{}.{:02}e{}", random.below(1000) + 1, random.below(100), random.below(5));
        let body = format!(r#"{{"value":{number},"unit":"kJ/kg"}}"#);
        let mut faults = Faults::new();
        let tree = Tree::read(body.as_bytes(), &LIMITS, &mut faults).unwrap();
        let member = tree.root().quantity(Dimension::SpecificEnergy, &mut faults).unwrap();
        let text = format!("{number} kJ/kg");
        let literal = read_text(&text, Dimension::SpecificEnergy, Bounds::Physical).unwrap();
        assert_eq!((member.value, member.half_digit), (literal.value, literal.half_digit));
        assert_eq!(member.number, number);
        assert_eq!(member.text, text);
    }
}
