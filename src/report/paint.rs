//! Colour for terminals, by meaning.

/// Paints words, or leaves them plain.
#[derive(Debug, Clone, Copy)]
pub struct Paint {
    /// Whether to paint at all.
    pub on: bool,
}

impl Paint {
    /// Something holds.
    pub fn good(self, text: &str) -> String {
        self.sgr("32;1", text)
    }

    /// Something is broken.
    pub fn bad(self, text: &str) -> String {
        self.sgr("31;1", text)
    }

    /// Something wants a look.
    pub fn doubtful(self, text: &str) -> String {
        self.sgr("33;1", text)
    }

    /// A heading.
    pub fn heading(self, text: &str) -> String {
        self.sgr("1", text)
    }

    /// Less important.
    pub fn faint(self, text: &str) -> String {
        self.sgr("2", text)
    }

    fn sgr(self, code: &str, text: &str) -> String {
        if self.on { format!("\u{1b}[{code}m{text}\u{1b}[0m") } else { text.to_owned() }
    }
}
