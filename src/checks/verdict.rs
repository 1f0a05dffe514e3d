//! What a requirement comes to.

use std::fmt;

/// What a requirement comes to, the worst first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Verdict {
    /// It breaks somewhere in the range of the facts, whatever the guesses are within their limits.
    Fails,
    /// It breaks with the guesses at their nominal values.
    Doubtful,
    /// A figure is missing and the rest does not decide.
    Unknown,
    /// It breaks only at the far end of a guess.
    Tight,
    /// It breaks nowhere.
    Holds,
}

/// How much a verdict matters.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Level {
    /// The board will not do as drawn.
    Error,
    /// It hangs on a guess, and the guess speaks against it.
    Warning,
    /// Something to settle.
    Note,
}

impl Verdict {
    /// Every verdict, the worst first.
    pub const ALL: [Self; 5] = [Self::Fails, Self::Doubtful, Self::Unknown, Self::Tight, Self::Holds];

    /// Its name in results and in cases.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Fails => "fails",
            Self::Doubtful => "doubtful",
            Self::Unknown => "unknown",
            Self::Tight => "tight",
            Self::Holds => "holds",
        }
    }

    /// The verdict of a name.
    #[must_use]
    pub fn of_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|verdict| verdict.name() == name)
    }

    /// The verdict under a cap: no worse than `cap`. What is unknown stays so, it is a note already.
    #[must_use]
    pub fn at_most(self, cap: Self) -> Self {
        if self == Self::Unknown && cap != Self::Holds { self } else { self.max(cap) }
    }

    /// Its level; what holds has none.
    #[must_use]
    pub fn level(self) -> Option<Level> {
        match self {
            Self::Fails => Some(Level::Error),
            Self::Doubtful => Some(Level::Warning),
            Self::Unknown | Self::Tight => Some(Level::Note),
            Self::Holds => None,
        }
    }
}

impl fmt::Display for Verdict {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(self.name())
    }
}

impl Level {
    /// Its name in results.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Error => "error",
            Self::Warning => "warning",
            Self::Note => "note",
        }
    }
}

impl fmt::Display for Level {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(self.name())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_cap_mildens_and_leaves_what_is_unknown() {
        assert_eq!(Verdict::Fails.at_most(Verdict::Doubtful), Verdict::Doubtful);
        assert_eq!(Verdict::Doubtful.at_most(Verdict::Tight), Verdict::Tight);
        assert_eq!(Verdict::Unknown.at_most(Verdict::Tight), Verdict::Unknown);
        assert_eq!(Verdict::Tight.at_most(Verdict::Doubtful), Verdict::Tight);
        assert_eq!(Verdict::Holds.at_most(Verdict::Fails), Verdict::Holds);
    }
}
