//! Names match in any case; comparing them makes no copy.

use std::cmp::Ordering;

/// Whether two names are the same in any case.
#[inline]
pub fn same_name(a: &str, b: &str) -> bool {
    a.eq_ignore_ascii_case(b) || (!a.is_ascii() && !b.is_ascii() && name_order(a, b) == Ordering::Equal)
}

/// The order of two names in any case, for sorting and searching.
pub fn name_order(a: &str, b: &str) -> Ordering {
    if a.is_ascii() && b.is_ascii() {
        let lower = |byte: u8| byte.to_ascii_lowercase();
        return a.bytes().map(lower).cmp(b.bytes().map(lower));
    }
    a.chars().flat_map(char::to_lowercase).cmp(b.chars().flat_map(char::to_lowercase))
}

/// A number that is equal for names that are the same in any case; different names may share it.
pub fn name_hash(name: &str) -> u64 {
    if name.is_ascii() {
        return name.bytes().fold(0, |hash, byte| mix(hash, u64::from(byte.to_ascii_lowercase())));
    }
    name.chars().flat_map(char::to_lowercase).fold(0, |hash, letter| mix(hash, u64::from(letter)))
}

/// One step of a multiplicative hash.
fn mix(hash: u64, unit: u64) -> u64 {
    (hash.rotate_left(5) ^ unit).wrapping_mul(0x517c_c1b7_2722_0a95)
}

#[cfg(test)]
mod tests {
    use super::{name_hash, name_order, same_name};
    use std::cmp::Ordering;

    #[test]
    fn case_does_not_count() {
        assert!(same_name("Net-_U1-Pad2_", "NET-_u1-pad2_"));
        assert!(same_name("Ωmega", "ωMEGA"));
        assert!(!same_name("a", "ab"));
        assert_eq!(name_hash("VCC"), name_hash("vcc"));
        assert_eq!(name_hash("Äb"), name_hash("äB"));
        assert_eq!(name_order("b", "A"), Ordering::Greater);
        assert_eq!(name_order("Ω1", "ω1"), Ordering::Equal);
    }
}
