//! A LibreOffice with a profile of its own that runs Basic macros without a window.

use std::path::Path;
use std::process::{Command, Stdio};

use tempfile::TempDir;

pub struct Office {
    profile: TempDir,
}

impl Office {
    /// Starts it once, so that the profile exists, and puts the modules into its own macros.
    pub fn with_modules(modules: &[(&str, &str)]) -> Self {
        let office = Office { profile: TempDir::new().unwrap() };
        office.run("--terminate_after_init", Path::new("/"));
        let folder = office.profile.path().join("user/basic/Standard");
        std::fs::create_dir_all(&folder).unwrap();
        let mut elements = String::new();
        for (name, source) in modules {
            let source = source.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;");
            let module = format!(
                "{PROLOGUE}<script:module xmlns:script=\"{SCRIPT}\" script:name=\"{name}\" script:language=\"StarBasic\">{source}</script:module>"
            );
            std::fs::write(folder.join(format!("{name}.xba")), module).unwrap();
            elements += &format!("<library:element library:name=\"{name}\"/>");
        }
        let library = format!(
            "{PROLOGUE}<library:library xmlns:library=\"{LIBRARY}\" library:name=\"Standard\" library:readonly=\"false\" library:passwordprotected=\"false\">{elements}</library:library>"
        );
        std::fs::write(folder.join("script.xlb"), library).unwrap();
        office
    }

    /// Runs a macro, which finds the folder under the name `RISEFALL_CHECK`.
    pub fn run_macro(&self, name: &str, folder: &Path) {
        self.run(&format!("macro:///Standard.{name}"), folder);
    }

    fn run(&self, argument: &str, folder: &Path) {
        let profile = format!("-env:UserInstallation=file://{}", self.profile.path().display());
        let status = Command::new("timeout")
            .args(["120", "soffice", "--headless", "--norestore", "--nologo", "--nolockcheck", &profile, argument])
            .env("RISEFALL_CHECK", folder)
            .stdout(Stdio::null())
            .stderr(Stdio::null())
            .status()
            .expect("LibreOffice is installed");
        assert!(status.success(), "LibreOffice ended with {status}");
    }
}

const PROLOGUE: &str = "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n";
const SCRIPT: &str = "http://openoffice.org/2000/script";
const LIBRARY: &str = "http://openoffice.org/2000/library";
