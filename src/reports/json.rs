//! Results as JSON: one object around all documents, or one document per line. Keys and their
//! order are a promise to other programs; they may grow in number but never change their meaning.

use super::{Entry, Report, Show};
use crate::judge::{Counts, Document, Finding, Repair, Verdict};
use crate::manuscript::{Area, LineArea, Place, is_one_line};
use crate::statements::{Quantity, Statement};
use serde::Serialize;
use serde::ser::{SerializeMap, Serializer};

/// One JSON object with a list of documents.
pub struct Json {
    /// Which findings are listed.
    pub show: Show,
}

/// One JSON document per line.
pub struct NdJson {
    /// Which findings are listed.
    pub show: Show,
}

impl Report for Json {
    fn opening(&self) -> String {
        format!(
            "{{\"tieout\": \"{}\", \"documents\": [\n",
            env!("CARGO_PKG_VERSION")
        )
    }

    fn entry(&self, entry: &Entry) -> String {
        document_json(entry, self.show)
    }

    fn between(&self) -> &'static str {
        ",\n"
    }

    fn closing(&self, _: &super::Tally) -> String {
        "\n]}\n".to_string()
    }
}

impl Report for NdJson {
    fn entry(&self, entry: &Entry) -> String {
        document_json(entry, self.show) + "\n"
    }
}

fn document_json(entry: &Entry, show: Show) -> String {
    let shown = match &entry.outcome {
        Ok(document) => {
            let manuscript = &document.manuscript;
            DocumentJson {
                path: &entry.name,
                format: Some(manuscript.format.name()),
                unreadable: None,
                counts: document.counts(),
                statements: document
                    .statements
                    .iter()
                    .map(|s| statement(document, s))
                    .collect(),
                findings: show.pick(&document.findings).map(finding).collect(),
                remarks: &manuscript.remarks,
            }
        }
        Err(reason) => DocumentJson {
            path: &entry.name,
            format: None,
            unreadable: Some(&reason.0),
            counts: Counts::default(),
            statements: Vec::new(),
            findings: Vec::new(),
            remarks: &[],
        },
    };
    // Every key is a string and every value a plain one, so there is nothing that could fail.
    serde_json::to_string(&shown).expect("strings, numbers and lists always serialise")
}

#[derive(Serialize)]
struct DocumentJson<'a> {
    path: &'a str,
    format: Option<&'static str>,
    unreadable: Option<&'a str>,
    counts: Counts,
    statements: Vec<StatementJson<'a>>,
    findings: Vec<FindingJson<'a>>,
    remarks: &'a [String],
}

#[derive(Serialize)]
struct StatementJson<'a> {
    id: usize,
    quote: &'a str,
    /// The same stretch as the file's text layer has it, where the page shows something else.
    #[serde(skip_serializing_if = "Option::is_none")]
    layer: Option<String>,
    place: Place,
    quantities: Vec<QuantityJson<'a>>,
}

#[derive(Serialize)]
struct QuantityJson<'a> {
    symbol: &'static str,
    printed: &'a str,
    comparator: &'static str,
    #[serde(serialize_with = "number")]
    low: f64,
    #[serde(serialize_with = "number")]
    high: f64,
    start: usize,
    end: usize,
    #[serde(skip_serializing_if = "Option::is_none")]
    borrowed: Option<&'a str>,
    /// The page that the box is on.
    #[serde(skip_serializing_if = "Option::is_none")]
    page: Option<u32>,
    #[serde(rename = "box", skip_serializing_if = "Option::is_none")]
    area: Option<Area>,
    #[serde(rename = "boxes", skip_serializing_if = "is_one_line")]
    areas: Vec<LineArea>,
    /// `uncertain` where a character before the digits could not be read.
    #[serde(skip_serializing_if = "Option::is_none")]
    sign: Option<&'static str>,
    /// What was read by context only.
    #[serde(skip_serializing_if = "Option::is_none")]
    context: Option<&'a str>,
}

fn statement<'a>(document: &'a Document, statement: &'a Statement) -> StatementJson<'a> {
    let manuscript = &document.manuscript;
    let block = &manuscript.blocks[statement.block];
    StatementJson {
        id: statement.id,
        quote: &manuscript.text[statement.range.clone()],
        layer: manuscript.layer_text(&statement.range),
        place: manuscript.place(block, statement.range.clone()),
        quantities: statement
            .quantities
            .iter()
            .map(|q| quantity(document, q))
            .collect(),
    }
}

fn quantity<'a>(document: &Document, quantity: &'a Quantity) -> QuantityJson<'a> {
    let areas = document.manuscript.areas(quantity.span.clone());
    QuantityJson {
        symbol: quantity.symbol,
        printed: &quantity.printed,
        comparator: quantity.comparator.sign(),
        low: quantity.interval.low,
        high: quantity.interval.high,
        start: document.manuscript.char_offset(quantity.span.start),
        end: document.manuscript.char_offset(quantity.span.end),
        borrowed: quantity.borrowed.as_deref(),
        page: areas.first().map(|a| a.page),
        area: areas.first().map(|a| a.area),
        areas,
        sign: quantity.doubt.unsigned.map(|_| "uncertain"),
        context: quantity.doubt.by_context.as_deref(),
    }
}

#[derive(Serialize)]
struct FindingJson<'a> {
    relation: &'static str,
    #[serde(skip_serializing_if = "<[_]>::is_empty")]
    with: &'a [&'static str],
    verdict: Verdict,
    statements: &'a [usize],
    place: &'a Place,
    quote: &'a str,
    #[serde(serialize_with = "reported")]
    reported: &'a [(&'static str, String)],
    #[serde(serialize_with = "expected")]
    expected: &'a [(&'static str, [f64; 2])],
    assumes: &'a [String],
    says: &'a str,
    repairs: &'a [Repair],
}

fn finding(finding: &Finding) -> FindingJson<'_> {
    FindingJson {
        relation: finding.relation,
        with: &finding.with,
        verdict: finding.verdict,
        statements: &finding.statements,
        place: &finding.place,
        quote: &finding.quote,
        reported: &finding.reported,
        expected: &finding.expected,
        assumes: &finding.assumes,
        says: &finding.says,
        repairs: &finding.repairs,
    }
}

fn reported<S: Serializer>(list: &[(&'static str, String)], to: S) -> Result<S::Ok, S::Error> {
    map(list, to, |text| text.clone())
}

fn expected<S: Serializer>(list: &[(&'static str, [f64; 2])], to: S) -> Result<S::Ok, S::Error> {
    map(list, to, |[low, high]| {
        [Number(outward(*low, false)), Number(outward(*high, true))]
    })
}

/// A list of pairs as an object. A symbol that comes again is told apart by its count (`M`, `M#2`),
/// because many programs keep only one of two equal keys.
fn map<S: Serializer, T, U: Serialize>(
    list: &[(&'static str, T)],
    to: S,
    show: impl Fn(&T) -> U,
) -> Result<S::Ok, S::Error> {
    let mut object = to.serialize_map(Some(list.len()))?;
    for (i, (symbol, value)) in list.iter().enumerate() {
        match list[..i].iter().filter(|(s, _)| s == symbol).count() {
            0 => object.serialize_entry(symbol, &show(value))?,
            before => object.serialize_entry(&format!("{symbol}#{}", before + 1), &show(value))?,
        }
    }
    object.end()
}

/// A number as short as it can be: whole ones without a decimal point, infinite ones as null.
struct Number(f64);

impl Serialize for Number {
    fn serialize<S: Serializer>(&self, to: S) -> Result<S::Ok, S::Error> {
        number(&self.0, to)
    }
}

fn number<S: Serializer>(value: &f64, to: S) -> Result<S::Ok, S::Error> {
    const WHOLE_UP_TO: f64 = 9e15;
    if !value.is_finite() {
        to.serialize_none()
    } else if value.fract() == 0.0 && value.abs() < WHOLE_UP_TO {
        to.serialize_i64(*value as i64)
    } else {
        to.serialize_f64(*value)
    }
}

/// An end of a range at six significant digits, moved outward so that the range still holds every
/// value it held. What differs from a six-digit number by the rounding error of our own
/// arithmetic only is taken for that number.
fn outward(value: f64, up: bool) -> f64 {
    if value == 0.0 || !value.is_finite() {
        return value;
    }
    let shown = format!("{value:.5e}");
    let nearest: f64 = shown.parse().unwrap_or(value);
    if (nearest - value).abs() <= value.abs() * 1e-9 || (nearest >= value) == up {
        return nearest;
    }
    let (digits, exponent) = shown.split_once('e').unwrap_or((&shown, "0"));
    let digits: i64 = digits.replace('.', "").parse().unwrap_or_default();
    let exponent: i32 = exponent.parse().unwrap_or_default();
    let step = if up { 1 } else { -1 };
    format!("{}e{}", digits + step, exponent - 5)
        .parse()
        .unwrap_or(value)
}

#[cfg(test)]
mod tests {
    use super::super::samples;
    use super::super::{Entry, Tally};
    use super::*;
    use crate::readers::Unreadable;
    use proptest::prelude::*;

    #[test]
    fn ranges_are_shortened_outward() {
        assert_eq!(outward(0.035_812_345, false), 0.035_812_3);
        assert_eq!(outward(0.035_812_345, true), 0.035_812_4);
        assert_eq!(outward(-1.234_567_8, false), -1.234_57);
        assert_eq!(outward(-1.234_567_8, true), -1.234_56);
        assert_eq!(outward(0.035_799_999_999_999, false), 0.0358);
        assert_eq!(outward(9.999_999_9, true), 10.0);
        assert_eq!(outward(1.000_000_4e-30, false), 1e-30);
        assert_eq!(outward(f64::INFINITY, true), f64::INFINITY);
        assert_eq!(outward(0.0, false), 0.0);
    }

    proptest! {
        #[test]
        fn a_shortened_range_still_holds_the_value(value in prop_oneof![-1e9..1e9f64, -1e-3..1e-3f64]) {
            let slack = value.abs() * 1e-9;
            let (low, high) = (outward(value, false), outward(value, true));
            prop_assert!(low <= value + slack && value - slack <= high);
            prop_assert!(high - low <= value.abs() * 2.1e-5);
        }
    }

    #[test]
    fn a_document_in_full() {
        let json = Json { show: Show::All }.entry(&samples::conflict());
        assert_eq!(json, samples::CONFLICT_JSON.replace('\n', ""));
    }

    #[test]
    fn an_unreadable_input_keeps_every_key() {
        let entry = Entry {
            name: "torn \"copy\".pdf".into(),
            outcome: Err(Unreadable::new("is damaged; export it again")),
        };
        let report = NdJson { show: Show::All };
        assert_eq!(
            report.entry(&entry),
            concat!(
                r#"{"path":"torn \"copy\".pdf","format":null,"unreadable":"is damaged; export it again","#,
                r#""counts":{"statements":0,"quantities":0,"agrees":0,"conflicts":0,"reverses":0,"open":0},"#,
                r#""statements":[],"findings":[],"remarks":[]}"#,
                "\n"
            )
        );
    }

    #[test]
    fn the_frame_around_documents_is_valid_json() {
        let report = Json { show: Show::All };
        let one = samples::conflict();
        let whole = [
            report.opening(),
            report.entry(&one),
            report.between().to_string(),
            report.entry(&one),
            report.closing(&Tally::default()),
        ]
        .concat();
        let read: serde_json::Value = serde_json::from_str(&whole).expect("valid JSON");
        assert_eq!(read["tieout"], env!("CARGO_PKG_VERSION"));
        assert_eq!(read["documents"].as_array().map(Vec::len), Some(2));
        let none = report.opening() + &report.closing(&Tally::default());
        assert!(serde_json::from_str::<serde_json::Value>(&none).is_ok());
    }

    #[test]
    fn findings_that_are_not_asked_for_are_left_out_but_counted() {
        let json = NdJson { show: Show::Reverses }.entry(&samples::conflict());
        let read: serde_json::Value = serde_json::from_str(&json).expect("valid JSON");
        assert_eq!(read["findings"], serde_json::json!([]));
        assert_eq!(read["counts"]["conflicts"], 1);
    }

    #[test]
    fn a_symbol_that_comes_twice_keeps_both_values() {
        let mut entry = samples::conflict();
        if let Ok(document) = &mut entry.outcome {
            document.findings[0].reported = vec![("M", "= 3.1".into()), ("M", "= 3.2".into())];
            document.findings[0].expected = vec![("p", [f64::NEG_INFINITY, 0.5])];
        }
        let json = NdJson { show: Show::All }.entry(&entry);
        assert!(json.contains(r#""reported":{"M":"= 3.1","M#2":"= 3.2"},"expected":{"p":[null,0.5]}"#));
    }
}
