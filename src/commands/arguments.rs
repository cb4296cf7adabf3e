//! Arguments that several commands share.

use std::path::PathBuf;

use clap::Args;

use crate::claims::{RouteChoice, SchemeChoice};
use crate::record::Parameters;

/// The scheme: one of `--command`, `--plugin` and `--classical`.
#[derive(Clone, Debug, Args)]
#[group(required = true, multiple = false, id = "route")]
pub struct SchemeRoute {
    /// The command line of an executable that converses in JSON, such as "python3 my_scheme.py".
    #[arg(long, value_name = "LINE")]
    command: Option<String>,
    /// A shared library, or the folder of a plugin crate, which is then built.
    #[arg(long, value_name = "PATH")]
    plugin: Option<PathBuf>,
    /// A classical scheme that comes with the program.
    #[arg(long, value_name = "NAME")]
    classical: Option<String>,
}

/// The scheme, and which of a library that carries several.
#[derive(Clone, Debug, Args)]
pub struct Scheme {
    #[command(flatten)]
    route: SchemeRoute,
    /// Which scheme of a plugin that carries several.
    #[arg(long, value_name = "NAME", requires = "plugin")]
    name: Option<String>,
}

impl Scheme {
    /// How the scheme is reached.
    ///
    /// # Errors
    /// A command line that cannot be split into words.
    pub fn choice(&self) -> Result<SchemeChoice, String> {
        let route = match (&self.route.command, &self.route.plugin, &self.route.classical) {
            (Some(line), _, _) => match shlex::split(line).filter(|words| !words.is_empty()) {
                Some(words) => RouteChoice::Command(words),
                None => return Err(format!("--command `{line}` cannot be split into words; check its quotes")),
            },
            (_, Some(path), _) => RouteChoice::Plugin { path: path.clone(), name: self.name.clone() },
            (_, _, name) => RouteChoice::Classical(name.clone().unwrap_or_default()),
        };
        Ok(SchemeChoice::new(route))
    }
}

/// A finite number above zero.
///
/// # Errors
/// What it is instead.
pub fn positive(text: &str) -> Result<f64, String> {
    match text.trim().parse::<f64>() {
        Ok(number) if number.is_finite() && number > 0.0 => Ok(number),
        _ => Err("it must be a finite number above zero".to_owned()),
    }
}

/// Parameters of the equation.
#[derive(Clone, Debug, Args)]
pub struct ParameterArguments {
    /// A parameter of the equation, such as velocity=0.7 or velocity=0.7,-0.4; repeatable.
    #[arg(long = "parameter", value_name = "NAME=VALUE")]
    parameters: Vec<String>,
}

impl ParameterArguments {
    /// The parameters by name.
    ///
    /// # Errors
    /// A text that is not `name=number` or `name=number,number`.
    pub fn parse(&self) -> Result<Parameters, String> {
        let parse = |text: &String| {
            let (name, values) = text.split_once('=')?;
            let values = values.split(',').map(|value| value.trim().parse::<f64>().ok()).collect::<Option<Vec<_>>>()?;
            Some((name.trim().to_owned(), values))
        };
        let one = |text: &String| {
            parse(text)
                .ok_or_else(|| format!("--parameter `{text}` is not of the form name=number or name=number,number"))
        };
        self.parameters.iter().map(one).collect()
    }
}

/// What becomes of the results of a single study.
#[derive(Clone, Debug, Args)]
pub struct Output {
    /// Prints the results as JSON to stdout, and nothing else there.
    #[arg(long)]
    pub json: bool,
    /// Leaves a dossier in this folder.
    #[arg(long, value_name = "DIR")]
    pub out: Option<PathBuf>,
    /// Seed of every random state.
    #[arg(long, default_value_t = 1)]
    pub seed: u64,
}
