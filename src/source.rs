//! Text and positions: the files of one run and where in them a thing was written.
//!
//! Reads no files; whoever loads a file adds its text here once and refers to it by [`Span`].

mod words;

use encoding_rs::{Encoding, UTF_8, UTF_16BE, UTF_16LE, WINDOWS_1252};
pub use words::{nearest, quote};

/// Why bytes are no text.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum DecodeFault {
    /// A byte that no text holds.
    #[error("expected text, found the byte 0x{byte:02X} at offset {offset}, as binary files have it")]
    Binary {
        /// The byte.
        byte: u8,
        /// How many bytes of the decoded text stand before it.
        offset: usize,
    },
}

/// Decodes a text file: UTF-8, UTF-16 with or without a byte order mark, else Windows-1252.
///
/// The mark goes, so do Ctrl-Z signs at the end; line ends of bare carriage returns become line feeds.
///
/// # Errors
/// [`DecodeFault::Binary`] where control characters other than blanks are left.
pub fn decode(bytes: &[u8]) -> Result<String, DecodeFault> {
    let (encoding, bytes) = match Encoding::for_bom(bytes) {
        Some((encoding, length)) => (encoding, &bytes[length..]),
        None => (guess(bytes), bytes),
    };
    let (text, _) = encoding.decode_without_bom_handling(bytes);
    let mut text = text.into_owned();
    if let Some(before) = text.trim_end_matches(['\r', '\n']).strip_suffix('\u{1a}') {
        text.truncate(before.trim_end_matches('\u{1a}').len());
    }
    let control =
        |byte: &u8| *byte < 0x20 && !matches!(byte, b'\t' | b'\n' | b'\r' | 0x0b | 0x0c) || *byte == 0x7f;
    if let Some(offset) = text.bytes().position(|byte| control(&byte)) {
        return Err(DecodeFault::Binary { byte: text.as_bytes()[offset], offset });
    }
    if text.contains('\r') && !text.contains('\n') {
        text = text.replace('\r', "\n");
    }
    Ok(text)
}

/// The encoding of a text without a mark: every second byte of UTF-16 is mostly zero in a netlist.
fn guess(bytes: &[u8]) -> &'static Encoding {
    let sample = &bytes[..bytes.len().min(4_096)];
    let zeros = |first: usize| sample.iter().skip(first).step_by(2).filter(|byte| **byte == 0).count();
    let (even, odd) = (zeros(0), zeros(1));
    let many = sample.len() / 4;
    if many < odd && even * 10 < odd {
        UTF_16LE
    } else if many < even && odd * 10 < even {
        UTF_16BE
    } else if std::str::from_utf8(bytes).is_ok() {
        UTF_8
    } else {
        WINDOWS_1252
    }
}

/// One text of the run.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct FileId(pub u32);

/// A stretch of one file, in bytes of its decoded text.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Span {
    /// The file it lies in.
    pub file: FileId,
    /// First byte.
    pub start: u32,
    /// One past the last byte.
    pub end: u32,
}

/// A span as people count: lines and columns from one, columns in characters.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Place {
    /// Line of the first character.
    pub line: u32,
    /// Column of the first character.
    pub column: u32,
    /// Column one past the last character on that first line.
    pub end_column: u32,
}

/// A decoded text and the name it is shown by.
#[derive(Debug)]
pub struct SourceFile {
    /// The path as the user or an include line wrote it.
    pub path: String,
    /// The decoded text.
    pub text: String,
    lines: Vec<u32>,
}

/// All texts of a run.
#[derive(Debug, Default)]
pub struct Sources {
    files: Vec<SourceFile>,
}

impl Sources {
    /// Adds a text under the name it is shown by.
    pub fn add(&mut self, path: impl Into<String>, text: String) -> FileId {
        let newlines = text.bytes().enumerate().filter(|(_, byte)| *byte == b'\n');
        let lines = std::iter::once(0).chain(newlines.map(|(at, _)| at as u32 + 1)).collect();
        self.files.push(SourceFile { path: path.into(), text, lines });
        FileId(self.files.len() as u32 - 1)
    }

    /// The file behind an id.
    pub fn file(&self, id: FileId) -> &SourceFile {
        &self.files[id.0 as usize]
    }

    /// The text that a span covers.
    pub fn text(&self, span: Span) -> &str {
        &self.file(span.file).text[span.start as usize..span.end as usize]
    }

    /// Where a span lies, in lines and columns.
    pub fn place(&self, span: Span) -> Place {
        let file = self.file(span.file);
        let line = file.lines.partition_point(|start| *start <= span.start) - 1;
        let start = file.lines[line] as usize;
        let line_end = file.lines.get(line + 1).map_or(file.text.len(), |next| *next as usize - 1);
        let column = |byte: usize| file.text[start..byte.clamp(start, line_end)].chars().count() as u32 + 1;
        Place {
            line: line as u32 + 1,
            column: column(span.start as usize),
            end_column: column(span.end as usize),
        }
    }
}

/// Whether a name matches a pattern with `*`, in any case.
pub fn matches(pattern: &str, name: &str) -> bool {
    let (pattern, name) = (pattern.as_bytes(), name.as_bytes());
    let (mut p, mut n, mut star) = (0, 0, None);
    while n < name.len() {
        match (pattern.get(p), star) {
            (Some(b'*'), _) => {
                star = Some((p, n));
                p += 1;
            }
            (Some(byte), _) if byte.eq_ignore_ascii_case(&name[n]) => {
                p += 1;
                n += 1;
            }
            (_, Some((at, from))) => {
                star = Some((at, from + 1));
                p = at + 1;
                n = from + 1;
            }
            (_, None) => return false,
        }
    }
    pattern[p..].iter().all(|byte| *byte == b'*')
}
