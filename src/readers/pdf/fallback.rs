//! The second engine, for files that the first one can't open. It reads some of them, but it may
//! panic, overflow its stack, loop or fill the memory: outside a worker it is a risk.

use super::guard;

/// The text of each page as the second engine sees it, or `None` when it fails too.
pub fn pages(bytes: &[u8]) -> Option<Vec<String>> {
    let owned = bytes.to_vec();
    let pages = guard::run(move || pdf_extract::extract_text_from_mem_by_pages(&owned));
    let pages = pages.ok()?.ok()?;
    pages.iter().any(|page| !page.trim().is_empty()).then_some(pages)
}

#[cfg(test)]
mod tests {
    use super::super::sample::{at, content, pdf};
    use super::*;

    #[test]
    fn the_second_engine_reads_page_by_page() {
        let contents = [
            content(&[at(50.0, 700.0, "Watered more often, p = .023.")]),
            content(&[at(50.0, 700.0, "And on the next page.")]),
        ];
        let good = pages(&pdf(&contents, "")).expect("a whole file is read");
        assert_eq!(good.len(), 2, "{good:?}");
        assert!(good[0].contains("p = .023") && good[1].contains("next page"));
        assert_eq!(pages(b"%PDF-1.4 nothing behind it"), None);
    }
}
