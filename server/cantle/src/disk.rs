//! Reading source files: the only part of the program that opens them.
//!
//! Includes are looked for beside the including file, then in the search
//! path. What an editor holds open takes the place of what the disk holds.
//! Only regular files of bounded size are read, so that an include can
//! neither hang on a device nor fill the memory.

use std::collections::BTreeMap;
use std::fs::{self, File};
use std::io::Read;
use std::path::{Component, Path, PathBuf};
use std::sync::Arc;

use program::{FileProblem, Files, Limits};
use ropey::Rope;

/// The files an analysis may see.
#[derive(Debug, Clone)]
pub struct Disk {
    /// Directories searched after the including file's own.
    pub search_path: Vec<PathBuf>,
    /// Texts held open by an editor, by [`identity`].
    pub open: Arc<BTreeMap<String, Rope>>,
    /// Most bytes of one file.
    pub max_bytes: usize,
}

impl Default for Disk {
    fn default() -> Self {
        Disk {
            search_path: Vec::new(),
            open: Arc::default(),
            max_bytes: Limits::default().file_bytes,
        }
    }
}

impl Files for Disk {
    fn read(&self, from: &str, include: &str) -> Result<(String, Arc<str>), FileProblem> {
        let beside = Path::new(from).parent().unwrap_or(Path::new("")).to_owned();
        let mut looked_in = Vec::new();
        for directory in std::iter::once(&beside).chain(&self.search_path) {
            let path = directory.join(include);
            let name = identity(&path);
            if let Some(text) = self.open.get(&name) {
                return Ok((name, text.to_string().into()));
            }
            match read_text(&path, self.max_bytes) {
                Err(FileProblem::NotFound { looked_in: tried }) => looked_in.extend(tried),
                other => return other.map(|text| (name, text)),
            }
        }
        looked_in.dedup();
        Err(FileProblem::NotFound { looked_in })
    }
}

/// Reads a regular file of at most `max_bytes` bytes of UTF-8.
///
/// # Errors
/// What a person can do something about: no such file, not a regular file,
/// too large, not readable, not UTF-8 (with the first offending byte).
pub fn read_text(path: &Path, max_bytes: usize) -> Result<Arc<str>, FileProblem> {
    let refused = |why: String| FileProblem::Refused(format!("`{}` {why}", path.display()));
    let unreadable = |error: std::io::Error| match error.kind() {
        std::io::ErrorKind::NotFound | std::io::ErrorKind::NotADirectory => {
            FileProblem::NotFound { looked_in: vec![path.display().to_string()] }
        }
        _ => refused(format!("cannot be read: {error}")),
    };
    // Looked at before it is opened: opening a pipe would wait for its writer.
    let metadata = fs::metadata(path).map_err(unreadable)?;
    if metadata.is_dir() {
        return Err(refused("is a directory".into()));
    }
    if !metadata.is_file() {
        return Err(refused("is not a regular file".into()));
    }
    let mut bytes = Vec::new();
    let limit = u64::try_from(max_bytes).unwrap_or(u64::MAX).saturating_add(1);
    File::open(path)
        .and_then(|file| file.take(limit).read_to_end(&mut bytes))
        .map_err(unreadable)?;
    if bytes.len() > max_bytes {
        return Err(refused(format!("is larger than the limit of {max_bytes} bytes")));
    }
    match String::from_utf8(bytes) {
        Ok(text) => Ok(text.into()),
        Err(error) => Err(FileProblem::NotText { offset: error.utf8_error().valid_up_to() }),
    }
}

/// One name for one file: its canonical path where it exists, else its path
/// with `.` and `..` resolved by their names.
pub fn identity(path: &Path) -> String {
    let path = fs::canonicalize(path).unwrap_or_else(|_| {
        let mut plain = PathBuf::new();
        for part in path.components() {
            match part {
                Component::CurDir => {}
                Component::ParentDir if plain.file_name().is_some() => drop(plain.pop()),
                other => plain.push(other),
            }
        }
        plain
    });
    path.to_string_lossy().into_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn problem(path: &Path) -> FileProblem {
        read_text(path, 64).expect_err("must be refused")
    }

    #[test]
    fn refuses_what_is_no_text_file() {
        let home = tempfile::tempdir().expect("a directory");
        let file = |name: &str, bytes: &[u8]| {
            let path = home.path().join(name);
            fs::write(&path, bytes).expect("written");
            path
        };
        assert_eq!(&*read_text(&file("good", "π;\n".as_bytes()), 64).expect("read"), "π;\n");
        assert_eq!(problem(&file("latin", b"x q;\n// \xe9")), FileProblem::NotText { offset: 8 });
        assert!(problem(&file("long", &[b' '; 65])).to_string().contains("limit of 64 bytes"));
        assert!(problem(home.path()).to_string().contains("is a directory"));
        assert!(problem(Path::new("/dev/zero")).to_string().contains("not a regular file"));
        let missing = home.path().join("missing");
        assert!(matches!(problem(&missing), FileProblem::NotFound { .. }));
        assert!(matches!(problem(&missing.join("x")), FileProblem::NotFound { .. }));
    }

    #[test]
    fn finds_includes_beside_the_file_then_on_the_path_and_prefers_open_texts() {
        let home = tempfile::tempdir().expect("a directory");
        let (beside, shared) = (home.path().join("beside"), home.path().join("shared"));
        for directory in [&beside, &shared] {
            fs::create_dir(directory).expect("created");
        }
        fs::write(beside.join("a.inc"), "beside").expect("written");
        fs::write(shared.join("a.inc"), "shared a").expect("written");
        fs::write(shared.join("b.inc"), "shared b").expect("written");
        let mut disk = Disk { search_path: vec![shared.clone()], ..Disk::default() };
        let main = beside.join("main.qasm").to_string_lossy().into_owned();
        let text = |disk: &Disk, name: &str| disk.read(&main, name).map(|(_, t)| t.to_string());
        assert_eq!(text(&disk, "a.inc"), Ok("beside".into()));
        assert_eq!(text(&disk, "../beside/./a.inc"), Ok("beside".into()));
        assert_eq!(text(&disk, "b.inc"), Ok("shared b".into()));
        let FileProblem::NotFound { looked_in } = text(&disk, "c.inc").expect_err("missing") else {
            panic!("c.inc is missing");
        };
        assert_eq!(looked_in.len(), 2, "{looked_in:?}");
        let open = BTreeMap::from([(identity(&shared.join("b.inc")), Rope::from_str("open b"))]);
        disk.open = Arc::new(open);
        assert_eq!(text(&disk, "b.inc"), Ok("open b".into()));
    }
}
