//! The layout engine: the template, what it may call, and how text is escaped.

use std::sync::LazyLock;

use base64::Engine as _;
use base64::engine::general_purpose::STANDARD;
use minijinja::syntax::SyntaxConfig;
use minijinja::value::{Serde, Value, ValueKind};
use minijinja::{AutoEscape, Environment, Error, ErrorKind, UndefinedBehavior};
use serde::Serialize;

use crate::dossier::{clean, number};

/// The fonts of the page: family, weight, style, file.
const FONTS: [(&str, u32, &str, &[u8]); 5] = [
    ("Assay Sans", 400, "normal", include_bytes!("../../../reports/fonts/assay-sans-regular.woff2")),
    ("Assay Sans", 500, "normal", include_bytes!("../../../reports/fonts/assay-sans-medium.woff2")),
    ("Assay Serif", 400, "normal", include_bytes!("../../../reports/fonts/assay-serif-regular.woff2")),
    ("Assay Serif", 600, "normal", include_bytes!("../../../reports/fonts/assay-serif-semibold.woff2")),
    ("Assay Serif", 400, "italic", include_bytes!("../../../reports/fonts/assay-serif-italic.woff2")),
];

static LAYOUT: LazyLock<Environment<'static>> = LazyLock::new(|| {
    let mut layout = Environment::new();
    let syntax = SyntaxConfig::builder().trim_blocks(true).lstrip_blocks(true).build();
    layout.set_syntax(syntax.expect("the delimiters are the usual ones"));
    // A misspelt name in the template is an error and not an empty place.
    layout.set_undefined_behavior(UndefinedBehavior::Strict);
    layout.set_auto_escape_callback(|_| AutoEscape::Html);
    layout.set_formatter(|out, state, value| match value.as_str() {
        Some(text) if !value.is_safe() => minijinja::escape_formatter(out, state, &Value::from(clean::visible(text))),
        // A bare f64 would be printed with whatever digits it has: numbers go through `num`.
        None if value.kind() == ValueKind::Number && !value.is_integer() => {
            Err(Error::new(ErrorKind::InvalidOperation, "a number must pass through `num`"))
        }
        _ => minijinja::escape_formatter(out, state, value),
    });
    layout.add_filter("num", |value| num(value, number::typeset_short));
    layout.add_filter("column", |value| num(value, |number| number::typeset(number, number::DIGITS)));
    layout.add_filter("power", |value| num(value, |number| number::typeset_power(number, number::DIGITS)));
    let pieces = [
        ("index.html", include_str!("../../../reports/page/index.html")),
        ("contrast.html", include_str!("../../../reports/page/contrast.html")),
        ("pieces.html", include_str!("../../../reports/page/pieces.html")),
        ("marks.svg", include_str!("../../../reports/page/marks.svg")),
    ];
    for (name, text) in pieces {
        layout.add_template(name, text).expect("the templates are part of the program, and the tests render them");
    }
    layout
});

/// The page `template` of `view`.
pub(super) fn render(template: &str, view: &impl Serialize) -> Result<String, Error> {
    let style = format!("{}{}", fonts(), include_str!("../../../reports/page/page.css"));
    let script = concat!(include_str!("../../../reports/page/chart.js"), include_str!("../../../reports/page/page.js"));
    LAYOUT.get_template(template)?.render(minijinja::context! {
        page => Value::from(Serde(view)),
        style => Value::from_safe_string(style),
        script => Value::from_safe_string(script.into()),
    })
}

/// A number with all its digits for machines, rounded for people; a dash where it does not exist.
fn num(value: Value, typeset: fn(f64) -> String) -> Result<Value, Error> {
    if value.is_none() {
        return Ok(Value::from_safe_string("<span class=\"none\">–</span>".into()));
    }
    if value.is_integer() {
        return Ok(Value::from_safe_string(format!("<data value=\"{value}\">{value}</data>")));
    }
    let number = f64::try_from(value)?;
    let (exact, shown) = (number::exact(number), typeset(number));
    Ok(Value::from_safe_string(format!("<data value=\"{exact}\">{shown}</data>")))
}

fn fonts() -> String {
    let face = |(family, weight, style, bytes): &(&str, u32, &str, &[u8])| {
        format!(
            "@font-face{{font-family:\"{family}\";font-weight:{weight};font-style:{style};\
             src:url(data:font/woff2;base64,{}) format(\"woff2\")}}\n",
            STANDARD.encode(bytes)
        )
    };
    FONTS.iter().map(face).collect()
}
