//! Where the values come from.

/// A document or book.
#[derive(Debug, Clone, Copy)]
pub struct Source {
    /// Its title, with edition or document number.
    pub title: &'static str,
    /// Author or maker, and publisher.
    pub publisher: &'static str,
}

/// How a value was seen.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Print {
    /// In the document's own text.
    Seen,
    /// Secondary: read through a companion's run of the example; the book's page wasn't seen.
    Companion,
    /// From memory of the book; a companion's formula agrees.
    Memory,
    /// The print is known to be wrong; the value is what its own data give.
    Corrected,
    /// Not printed anywhere: the closed form beside the row was worked out.
    Computed,
}

/// Franco's book.
pub const FRANCO: Source = Source {
    title: "Design with Operational Amplifiers and Analog Integrated Circuits, 3rd ed., 2002",
    publisher: "S. Franco, McGraw-Hill",
};

/// Gayakwad's book.
pub const GAYAKWAD: Source =
    Source { title: "Op-Amps and Linear Integrated Circuits", publisher: "R. A. Gayakwad, Prentice Hall" };

/// Coughlin and Driscoll's book.
pub const COUGHLIN: Source = Source {
    title: "Operational Amplifiers and Linear Integrated Circuits",
    publisher: "R. F. Coughlin, F. F. Driscoll, Prentice Hall",
};

/// Fiore's book.
pub const FIORE: Source = Source {
    title: "Op Amps and Linear Integrated Circuits: Concepts and Applications",
    publisher: "J. M. Fiore, Delmar",
};

/// Datasheet of a fast op amp.
pub const MAX4100: Source = Source {
    title: "MAX4100/MAX4101 500 MHz low-power op amps, data sheet",
    publisher: "Maxim Integrated (now Analog Devices)",
};

/// Application brief on the common-mode range.
pub const SBOA583: Source = Source {
    title: "Op-amp common-mode limitations, application brief SBOA583, December 2023",
    publisher: "Texas Instruments",
};

/// Nodal analysis by hand.
pub const CLOSED_FORM: Source = Source { title: "closed form", publisher: "worked out for this test" };
