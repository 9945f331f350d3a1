//! A printed document: its sheets and the text that can be selected on them.
use lopdf::{Document, Object};

/// Pages of a PDF.
#[derive(Debug)]
pub struct Paper {
    /// Width and height of the first sheet in points, rounded.
    pub points: (u32, u32),
    /// Text of each sheet as it is stored, blanks aside: where lines break is the printer's business.
    pub sheets: Vec<String>,
}

impl Paper {
    /// Reads a document; `None` for what is none.
    pub fn read(pdf: &[u8]) -> Option<Self> {
        let document = Document::load_mem(pdf).ok()?;
        let pages = document.get_pages();
        let frame = *pages.values().next()?;
        let [_, _, width, height] = media_box(&document, frame)?[..] else { return None };
        let sheets = pages.keys().map(|page| Some(unbroken(&document.extract_text(&[*page]).ok()?)));
        Some(Self { points: (width.round() as u32, height.round() as u32), sheets: sheets.collect::<Option<_>>()? })
    }

    /// Number of sheets.
    pub fn pages(&self) -> usize {
        self.sheets.len()
    }

    /// Whether a sheet has a text, whatever its blanks and line breaks.
    pub fn has(&self, sheet: usize, text: &str) -> bool {
        self.sheets[sheet].contains(&unbroken(text))
    }
}

fn unbroken(text: &str) -> String {
    text.split_whitespace().collect()
}

/// Its own frame or that of the pages above it.
fn media_box(document: &Document, page: lopdf::ObjectId) -> Option<Vec<f32>> {
    let mut dictionary = document.get_dictionary(page).ok()?;
    loop {
        if let Ok(frame) = dictionary.get_deref(b"MediaBox", document).and_then(Object::as_array) {
            return frame.iter().map(|number| number.as_float().ok()).collect();
        }
        dictionary = dictionary.get_deref(b"Parent", document).and_then(Object::as_dict).ok()?;
    }
}
