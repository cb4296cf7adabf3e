//! The schemes of a run: each opened when it is first needed, and once.

use std::collections::BTreeMap;
use std::path::Path;

use crate::claims::{RouteChoice, SchemeChoice};
use crate::host::{Limits, Route, SchemeSource, Session};
use crate::record::SchemeRecord;

/// How the host reaches the scheme of a claims file.
pub fn source(choice: &SchemeChoice, folder: &Path) -> SchemeSource {
    let route = match &choice.route {
        RouteChoice::Command(command) => Route::Command(command.clone()),
        RouteChoice::Plugin { path, name } => Route::Plugin { path: path.clone(), name: name.clone() },
        RouteChoice::Classical(name) => Route::Classical(name.clone()),
    };
    let default = Limits::default();
    let limits = Limits {
        start: choice.start_limit.unwrap_or(default.start),
        request: choice.time_limit.unwrap_or(default.request),
        memory: choice.memory_limit.or(default.memory),
        message: choice.message_limit.unwrap_or(default.message),
        processes: choice.process_limit.or(default.processes),
    };
    SchemeSource { route, folder: folder.to_path_buf(), limits }
}

/// The schemes of a plan.
pub struct Schemes<'a> {
    choices: &'a BTreeMap<String, SchemeChoice>,
    folder: &'a Path,
    open: BTreeMap<String, Result<Session, String>>,
}

impl<'a> Schemes<'a> {
    /// The schemes `choices`, none of them opened yet.
    pub fn new(choices: &'a BTreeMap<String, SchemeChoice>, folder: &'a Path) -> Self {
        Self { choices, folder, open: BTreeMap::new() }
    }

    /// The conversation with scheme `name`.
    ///
    /// # Errors
    /// A sentence, where it cannot be opened; the same one at every call.
    pub fn session(&mut self, name: &str) -> Result<&mut Session, String> {
        if !self.open.contains_key(name) {
            let opened = Session::open(&source(&self.choices[name], self.folder)).map_err(|error| error.to_string());
            self.open.insert(name.to_owned(), opened);
        }
        self.open.get_mut(name).expect("it was just inserted").as_mut().map_err(|sentence| sentence.clone())
    }

    /// Who scheme `name` is, as far as it could be opened.
    pub fn record(&mut self, name: &str) -> SchemeRecord {
        match self.session(name) {
            Ok(session) => session_record(session),
            Err(fault) => {
                let route = match self.choices[name].route {
                    RouteChoice::Command(_) => "command",
                    RouteChoice::Plugin { .. } => "plugin",
                    RouteChoice::Classical(_) => "classical",
                };
                SchemeRecord {
                    name: name.to_owned(),
                    version: String::new(),
                    route: route.to_owned(),
                    digest: None,
                    fault: Some(fault),
                }
            }
        }
    }
}

/// Who the scheme of a conversation is.
pub fn session_record(session: &Session) -> SchemeRecord {
    let identity = session.identity();
    SchemeRecord {
        name: identity.name.clone(),
        version: identity.version.clone(),
        route: identity.route.to_string(),
        digest: Some(identity.digest.clone()).filter(|digest| !digest.is_empty()),
        fault: None,
    }
}
