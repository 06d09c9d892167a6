//! Contained reading comes to the same as reading in the process, remarks and refusals included.

use super::pool;
use std::path::{Path, PathBuf};
use tieout::readers::{self, contained::Limits};

fn fixtures(folder: &Path, found: &mut Vec<PathBuf>) {
    for entry in std::fs::read_dir(folder).expect("the fixtures are part of the repository") {
        let path = entry.expect("a readable entry").path();
        if path.is_dir() {
            fixtures(&path, found);
        } else {
            found.push(path);
        }
    }
}

#[test]
fn every_fixture_is_the_same_contained_and_not() {
    let mut files = Vec::new();
    fixtures(Path::new("fixtures"), &mut files);
    let pool = pool(Limits::default());
    let mut contained = 0;
    for path in files {
        let bytes = std::fs::read(&path).expect("a readable fixture");
        let opaque = readers::detect::opaque(&bytes).is_some();
        contained += u32::from(opaque);
        let here = readers::read_bytes(&bytes, &path);
        assert!(
            pool.read_bytes(bytes, &path) == here,
            "{} is read differently",
            path.display()
        );
        if !opaque {
            continue;
        }
        // Under another name there is one remark more.
        let wrong = Path::new("draft.tex");
        let bytes = std::fs::read(&path).expect("a readable fixture");
        assert!(pool.read_bytes(bytes.clone(), wrong) == readers::read_bytes(&bytes, wrong));
    }
    assert!(contained >= 10, "only {contained} files are of binary formats");
    assert_eq!(pool.started(), 1, "one worker reads them all");
}
