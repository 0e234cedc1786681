//! Reading netlists as exporters write them, and hostile text.

mod reader {
    mod board;
    mod corpus;
    mod fault;
    mod hostile;
    mod include;
    mod line;
    mod part;
    mod show;
    mod source;
    mod value;
}
