//! From the text of a claims file to a plan.

use std::collections::BTreeMap;
use std::ops::Range;
use std::path::Path;
use std::time::Duration;

use sha2::{Digest, Sha256};
use toml::Spanned;

use super::file::{ClaimsFile, OneOrMany, SchemeEntry};
use super::plan::{Claim, ClaimKind, Plan, RouteChoice, SchemeChoice};
use super::problem::{ClaimsError, line_of};
use crate::record::ClaimsRecord;

/// The name under which the scheme of `[scheme]` stands in a plan.
pub const ONLY_SCHEME: &str = "scheme";

/// Reads a claims file.
///
/// # Errors
/// The file cannot be read, is no TOML, has an unknown key or a wrong type, or names what does not exist.
pub fn read_claims(path: &Path) -> Result<Plan, ClaimsError> {
    let text = std::fs::read_to_string(path).map_err(|error| {
        ClaimsError::whole(path, format!("cannot be read: {error}; check the path, or run `gridassay judge` without one to see the embedded example"))
    })?;
    let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or(Path::new("."));
    plan_of(path, &text, folder)
}

/// The plan of a claims file's `text`; `path` is what errors name, relative paths in it are relative to `folder`.
///
/// # Errors
/// As [`read_claims`].
pub fn plan_of(path: &Path, text: &str, folder: &Path) -> Result<Plan, ClaimsError> {
    let reader = Reader { path, text, folder };
    let file: ClaimsFile = toml::from_str(text).map_err(|error| reader.syntax(&error))?;
    let schemes = reader.schemes(&file)?;
    let mut plan = Plan {
        claims_file: Some(ClaimsRecord {
            path: path.display().to_string(),
            digest: format!("{:x}", HexDigest(Sha256::digest(text.as_bytes()).as_slice())),
        }),
        folder: folder.to_path_buf(),
        schemes,
        seed: file.run.seed.unwrap_or(1),
        claims: Vec::new(),
    };
    let known: Vec<&String> = plan.schemes.keys().collect();
    let mut claims = Vec::new();
    for entry in &file.order {
        let kind = ClaimKind::Order(reader.order(entry.get_ref())?);
        reader.state(&mut claims, ("order", entry.span()), &known, entry.get_ref().scheme.as_ref(), kind)?;
    }
    for entry in &file.modes {
        let kind = ClaimKind::Modes(reader.modes(entry)?);
        reader.state(&mut claims, ("modes", entry.span()), &known, entry.get_ref().scheme.as_ref(), kind)?;
    }
    for entry in &file.operator {
        let kind = ClaimKind::Operator(reader.operator(entry)?);
        reader.state(&mut claims, ("operator", entry.span()), &known, entry.get_ref().scheme.as_ref(), kind)?;
    }
    for entry in &file.stability {
        let kind = ClaimKind::Stability(reader.stability(entry)?);
        reader.state(&mut claims, ("stability", entry.span()), &known, entry.get_ref().scheme.as_ref(), kind)?;
    }
    for entry in &file.invariants {
        let kind = ClaimKind::Invariants(reader.invariants(entry)?);
        reader.state(&mut claims, ("invariants", entry.span()), &known, entry.get_ref().scheme.as_ref(), kind)?;
    }
    if claims.is_empty() {
        return Err(ClaimsError::whole(
            path,
            "states no claim; add a table [[order]], [[modes]], [[stability]], [[operator]] or [[invariants]]",
        ));
    }
    plan.claims = claims;
    Ok(plan)
}

struct HexDigest<'a>(&'a [u8]);

impl std::fmt::LowerHex for HexDigest<'_> {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        self.0.iter().try_for_each(|byte| write!(out, "{byte:02x}"))
    }
}

/// A claims file being read: what errors name, and what paths are relative to.
pub(super) struct Reader<'a> {
    path: &'a Path,
    text: &'a str,
    pub(super) folder: &'a Path,
}

impl Reader<'_> {
    pub(super) fn at(&self, span: Range<usize>, message: impl Into<String>) -> ClaimsError {
        ClaimsError::at(self.path, self.text, span, message)
    }

    fn syntax(&self, error: &toml::de::Error) -> ClaimsError {
        let message = error.message().replace('\n', ", ");
        match error.span() {
            Some(span) => self.at(span, with_suggestion(&message)),
            None => ClaimsError::whole(self.path, message),
        }
    }

    fn schemes(&self, file: &ClaimsFile) -> Result<BTreeMap<String, SchemeChoice>, ClaimsError> {
        match (&file.scheme, file.schemes.is_empty()) {
            (Some(entry), true) => Ok(BTreeMap::from([(ONLY_SCHEME.to_owned(), self.scheme(entry)?)])),
            (None, false) => file.schemes.iter().map(|(name, entry)| Ok((name.clone(), self.scheme(entry)?))).collect(),
            (Some(entry), false) => Err(self.at(
                entry.span(),
                "names one scheme by [scheme] and others by [schemes]; give the one a name too: [schemes.NAME]",
            )),
            (None, true) => Err(ClaimsError::whole(
                self.path,
                "names no scheme; add a table [scheme] with one of `command`, `plugin` and `classical`",
            )),
        }
    }

    fn scheme(&self, entry: &Spanned<SchemeEntry>) -> Result<SchemeChoice, ClaimsError> {
        let scheme = entry.get_ref();
        let route = match (&scheme.command, &scheme.plugin, &scheme.classical) {
            (Some(command), None, None) if command.is_empty() => {
                return Err(
                    self.at(entry.span(), "`command` is empty; write for example [\"python3\", \"my_scheme.py\"]")
                );
            }
            (Some(command), None, None) => RouteChoice::Command(command.clone()),
            (None, Some(plugin), None) => RouteChoice::Plugin { path: plugin.into(), name: scheme.name.clone() },
            (None, None, Some(classical)) => {
                self.known_classical(entry.span(), classical)?;
                RouteChoice::Classical(classical.clone())
            }
            _ => {
                let message = "a scheme has exactly one of `command`, `plugin` and `classical`";
                return Err(self.at(entry.span(), message));
            }
        };
        if let Some(limit) = scheme.process_limit.as_ref().filter(|limit| *limit.get_ref() == 0) {
            return Err(
                self.at(limit.span(), "`process_limit` is 0; the scheme itself is a process, so give at least 1")
            );
        }
        let bytes = |text: &Option<Spanned<String>>| text.as_ref().map(|text| self.bytes(text)).transpose();
        let duration = |text: &Option<Spanned<String>>| text.as_ref().map(|text| self.duration(text)).transpose();
        Ok(SchemeChoice {
            route,
            time_limit: duration(&scheme.time_limit)?,
            start_limit: duration(&scheme.start_limit)?,
            memory_limit: bytes(&scheme.memory_limit)?,
            message_limit: bytes(&scheme.message_limit)?,
            process_limit: scheme.process_limit.as_ref().map(|limit| *limit.get_ref()),
        })
    }

    fn known_classical(&self, span: Range<usize>, name: &str) -> Result<(), ClaimsError> {
        let names = gridassay_classical::names();
        if names.contains(&name) {
            return Ok(());
        }
        let near = nearest(name, names.iter().copied());
        Err(self.at(span, format!("there is no classical scheme `{name}`{near}; there are: {}", names.join(", "))))
    }

    fn duration(&self, text: &Spanned<String>) -> Result<Duration, ClaimsError> {
        let units = [("ms", 1e-3), ("min", 60.0), ("s", 1.0), ("h", 3600.0)];
        let seconds = with_unit(text.get_ref(), &units).filter(|seconds| *seconds > 0.0 && *seconds <= 1e9);
        seconds.map(Duration::from_secs_f64).ok_or_else(|| {
            let message = format!(
                "`{}` is no duration; write for example \"60s\", \"500ms\", \"5min\" or \"2h\"",
                text.get_ref()
            );
            self.at(text.span(), message)
        })
    }

    fn bytes(&self, text: &Spanned<String>) -> Result<u64, ClaimsError> {
        let units = [("KiB", 1024.0), ("MiB", 1048576.0), ("GiB", 1073741824.0)];
        let bytes = with_unit(text.get_ref(), &units).filter(|bytes| *bytes >= 1.0 && *bytes < 1e18);
        bytes.map(|bytes| bytes as u64).ok_or_else(|| {
            let message =
                format!("`{}` is no amount of memory; write for example \"512MiB\" or \"4GiB\"", text.get_ref());
            self.at(text.span(), message)
        })
    }

    /// Adds one claim for each scheme that it is about.
    fn state(
        &self,
        claims: &mut Vec<Claim>,
        (word, span): (&str, Range<usize>),
        known: &[&String],
        about: Option<&Spanned<OneOrMany>>,
        kind: ClaimKind,
    ) -> Result<(), ClaimsError> {
        let about = match about {
            None => known.iter().map(|name| (*name).clone()).collect(),
            Some(names) => {
                if let Some(name) = names.get_ref().names().iter().find(|name| !known.contains(name)) {
                    let near = nearest(name, known.iter().map(|name| name.as_str()));
                    return Err(self.at(names.span(), format!("there is no scheme `{name}` in [schemes]{near}")));
                }
                names.get_ref().names().to_vec()
            }
        };
        for scheme in about {
            let number = claims.iter().filter(|claim: &&Claim| claim.id.starts_with(word)).count() + 1;
            let line = Some(line_of(self.text, &span));
            claims.push(Claim { id: format!("{word}-{number}"), scheme, line, kind: kind.clone() });
        }
        Ok(())
    }

    pub(super) fn positive(&self, value: &Spanned<f64>, key: &str) -> Result<f64, ClaimsError> {
        let number = *value.get_ref();
        if number.is_finite() && number > 0.0 {
            return Ok(number);
        }
        Err(self.at(value.span(), format!("`{key}` is {number}; it must be a finite number above zero")))
    }

    pub(super) fn equation(&self, equation: &Spanned<String>) -> Result<String, ClaimsError> {
        let names: Vec<String> =
            gridassay_reference::equation::all().iter().map(|known| known.name().to_owned()).collect();
        if names.contains(equation.get_ref()) {
            return Ok(equation.get_ref().clone());
        }
        let near = nearest(equation.get_ref(), names.iter().map(String::as_str));
        let message = format!("there is no equation `{}`{near}; there are: {}", equation.get_ref(), names.join(", "));
        Err(self.at(equation.span(), message))
    }
}

fn with_unit(text: &str, units: &[(&str, f64)]) -> Option<f64> {
    let text = text.trim();
    let (number, factor) = units.iter().find_map(|(unit, factor)| Some((text.strip_suffix(unit)?, factor)))?;
    number.trim().parse::<f64>().ok().map(|number| number * factor)
}

/// `; did you mean ...?` where a name is near enough.
fn nearest<'a>(name: &str, names: impl Iterator<Item = &'a str>) -> String {
    let best = names.map(|known| (strsim::osa_distance(name, known), known)).min();
    match best {
        Some((distance, known)) if distance <= 3.max(name.len() / 3) => format!(" (did you mean `{known}`?)"),
        _ => String::new(),
    }
}

/// Adds the nearest known key to the message about an unknown one.
fn with_suggestion(message: &str) -> String {
    let mut quoted = message.split('`').skip(1).step_by(2);
    match quoted.next() {
        Some(unknown) if message.starts_with("unknown field") => format!("{message}{}", nearest(unknown, quoted)),
        _ => message.to_owned(),
    }
}
