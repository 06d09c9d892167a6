use super::*;
use crate::manuscript::Format;
use quick_xml::events::Event;

fn line(source: &str) -> String {
    let mut b = Builder::new(Format::Html);
    let mut math = Math::new();
    let mut reader = quick_xml::Reader::from_str(source);
    let attribute = |e: &quick_xml::events::BytesStart, name: &str| {
        let found = e.try_get_attribute(name).expect("the test writes good XML")?;
        Some(found.value.to_string())
    };
    loop {
        match reader.read_event().expect("the test writes good XML") {
            Event::Start(e) => math.start(e.local_name().as_ref(), |n| attribute(&e, n)),
            Event::Empty(e) => {
                math.start(e.local_name().as_ref(), |n| attribute(&e, n));
                math.end();
            }
            Event::End(_) => math.end(),
            Event::Text(t) => math.text(&t),
            Event::Eof => break,
            _ => {}
        }
    }
    math.finish(&mut b);
    b.finish().text.trim_end().to_string()
}

#[test]
fn statistics_come_out_as_people_type_them() {
    assert_eq!(
        line(
            "<mrow><msup><mi>χ</mi><mn>2</mn></msup><mo>(</mo><mn>1</mn><mo>)</mo><mo>=</mo><mn>4.10</mn>\
             <mo>,</mo><mi>p</mi><mo>=</mo><mo>−</mo><mn>.03</mn></mrow>"
        ),
        "χ²(1) = 4.10, p = -.03"
    );
    assert_eq!(
        line("<msub><mi>F</mi><mrow><mn>1</mn><mo>,</mo><mn>63</mn></mrow></msub><mo>=</mo><mn>7.25</mn>"),
        "F₁,₆₃ = 7.25"
    );
    assert_eq!(
        line("<msubsup><mi>η</mi><mi>p</mi><mn>2</mn></msubsup><mo>=</mo><mn>.07</mn>"),
        "ηp² = .07"
    );
    assert_eq!(
        line(
            "<mi>P</mi><mo>=</mo><mn>3.4</mn><mo>×</mo><msup><mn>10</mn><mrow><mo>−</mo><mn>6</mn></mrow></msup>"
        ),
        "P = 3.4×10⁻⁶"
    );
    assert_eq!(line("<mn>0.45</mn><msup><mi/><mo>***</mo></msup>"), "0.45***");
}

#[test]
fn fractions_and_roots_get_brackets_where_they_need_them() {
    assert_eq!(line("<mfrac><mn>12</mn><mn>34</mn></mfrac>"), "12/34");
    assert_eq!(
        line("<mfrac><mrow><mi>a</mi><mo>+</mo><mi>b</mi></mrow><msqrt><mi>n</mi></msqrt></mfrac>"),
        "(a+b)/(√n)"
    );
    assert_eq!(line("<msqrt><mi>n</mi><mo>−</mo><mn>1</mn></msqrt>"), "√(n-1)");
    assert_eq!(line("<mroot><mi>x</mi><mn>3</mn></mroot>"), "x^(1/3)");
    assert_eq!(
        line("<msup><mi>x</mi><mfrac><mn>1</mn><mn>2</mn></mfrac></msup>"),
        "x^(1/2)"
    );
    assert_eq!(
        line("<mfrac><mfrac><mi>a</mi><mi>b</mi></mfrac><mi>c</mi></mfrac>"),
        "(a/b)/c"
    );
    assert_eq!(line("<mfrac><mi>a</mi></mfrac><mfrac/>"), "a");
}

#[test]
fn powers_and_indexes_never_run_into_numbers() {
    assert_eq!(
        line("<msup><mi>e</mi><mrow><mo>−</mo><mi>x</mi></mrow></msup>"),
        "e^(−x)".replace('−', "-")
    );
    assert_eq!(line("<msup><mi>X</mi><mi>T</mi></msup>"), "X^T");
    assert_eq!(
        line(
            "<munderover><mo>∑</mo><mrow><mi>i</mi><mo>=</mo><mn>1</mn></mrow><mi>n</mi></munderover>\
             <msub><mi>x</mi><mi>i</mi></msub>"
        ),
        "∑_(i = 1)^(n)xi"
    );
    assert_eq!(
        line("<msub><mi>x</mi><mrow><mi>t</mi><mo>=</mo><mn>1</mn></mrow></msub>"),
        "x_(t = 1)"
    );
    assert_eq!(
        line("<mmultiscripts><mi>X</mi><mn>1</mn><mn>2</mn><mprescripts/><none/><mn>3</mn></mmultiscripts>"),
        "X₁²³"
    );
    assert_eq!(
        line(
            "<msup><mi>e</mi><mrow><mo>−</mo><msub><mi>a</mi><mn>2</mn></msub></mrow></msup><msup><mi>y</mi><mrow><mo>(</mo><mi>j</mi><mo>)</mo></mrow></msup>"
        ),
        "e^(-a2)y^(j)"
    );
}

#[test]
fn accents_join_their_letter() {
    assert_eq!(line("<mover><mi>x</mi><mo>¯</mo></mover>"), "x\u{304}");
    assert_eq!(line("<mover><mi>y</mi><mo>^</mo></mover>"), "ŷ");
    assert_eq!(
        line(
            "<mi>t</mi><mover><mrow/><mo>˙</mo></mover><msup><mover><mi>t</mi><mo>˙</mo></mover><mi>n</mi></msup>"
        ),
        "tṫ^n"
    );
    assert_eq!(
        line("<msup><mi>x</mi><mover><mi>t</mi><mo>˙</mo></mover></msup><mi>y</mi>"),
        "x^ṫy"
    );
    assert_eq!(
        line("<mover><mi>β</mi><mo>^</mo></mover><mo>=</mo><mn>.2</mn>"),
        "β\u{302} = .2"
    );
    assert_eq!(
        line("<mover><mrow><mi>a</mi><mi>b</mi></mrow><mo>⏞</mo></mover>"),
        "ab"
    );
    assert_eq!(
        line("<munder><mi>max</mi><mi>x</mi></munder><mi>f</mi>"),
        "max_(x)f"
    );
    assert_eq!(line("<mover><mi>x</mi></mover>"), "x");
}

#[test]
fn a_formula_is_read_once() {
    assert_eq!(
        line(
            "<semantics><mrow><mi>p</mi><mo>=</mo><mn>.048</mn></mrow>\
             <annotation encoding='application/x-tex'>p = .048</annotation></semantics><mtext>&#x20;ok</mtext>"
                .replace("&#x20;", " ")
                .as_str()
        ),
        "p = .048 ok"
    );
    assert_eq!(line("<mphantom><mi>p</mi></mphantom><mi>q</mi>"), "q");
}

#[test]
fn fences_tables_and_words_are_kept_apart() {
    assert_eq!(
        line("<mfenced open='[' close=']' separators=';'><mn>−.5</mn><mn>.1</mn></mfenced>"),
        "[-.5; .1]"
    );
    assert_eq!(
        line(
            "<mtable><mtr><mtd><mi>a</mi></mtd><mtd><mi>b</mi></mtd></mtr><mtr><mtd><mi>c</mi></mtd></mtr></mtable>"
        ),
        "a b; c"
    );
    assert_eq!(
        line("<mi>log</mi><mi>x</mi><mspace width='1em'/><mtext>if</mtext><mi>y</mi>"),
        "log x if y"
    );
}

#[test]
fn any_nesting_ends() {
    let deep = format!("{}<mi>x</mi>{}", "<msup>".repeat(2000), "</msup>".repeat(2000));
    assert_eq!(line(&deep), "");
    assert_eq!(line("<mrow><msup><mi>x"), "x");
}

#[test]
fn formulas_of_any_shape_are_read() {
    const NAMES: [&str; 20] = [
        "mrow",
        "mi",
        "mn",
        "mo",
        "mtext",
        "msup",
        "msub",
        "msubsup",
        "mfrac",
        "msqrt",
        "mroot",
        "mover",
        "munder",
        "munderover",
        "mfenced",
        "mmultiscripts",
        "mprescripts",
        "mtable",
        "semantics",
        "annotation",
    ];
    const TEXTS: [&str; 12] = ["x", "ẋ", "t", "˙", "¯", "^", "2", "=", "log", "(", "−", "η"];
    let mut state = 7u64;
    let mut random = |below: usize| {
        // Knuth's MMIX generator; its high bits are the good ones.
        state = state
            .wrapping_mul(6364136223846793005)
            .wrapping_add(1442695040888963407);
        (state >> 33) as usize % below
    };
    for _ in 0..20_000 {
        let mut math = Math::new();
        for _ in 0..random(60) {
            match random(5) {
                0 | 1 => math.start(NAMES[random(NAMES.len())], |_| None),
                2 => math.end(),
                _ => math.text(TEXTS[random(TEXTS.len())]),
            }
        }
        let mut b = Builder::new(Format::Html);
        math.finish(&mut b);
        assert!(!b.finish().text.contains(PERHAPS_BRACKET));
    }
}
