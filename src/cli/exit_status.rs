//! The exit status, and which of several wins.

use std::process::ExitCode;

/// How a run ended; the worst of several counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum ExitStatus {
    /// 0: all well.
    AllWell,
    /// 1: a check failed, a record does not verify, a result is outside its limit.
    Finding,
    /// 2: the command line or a block is wrong.
    WrongInput,
    /// 3: a file or key could not be read or written.
    CannotReadOrWrite,
}

impl ExitStatus {
    /// The worse of two.
    #[must_use]
    pub fn and(self, other: Self) -> Self {
        self.max(other)
    }

    /// The number that the system is given.
    pub fn code(self) -> u8 {
        match self {
            Self::AllWell => 0,
            Self::Finding => 1,
            Self::WrongInput => 2,
            Self::CannotReadOrWrite => 3,
        }
    }
}

impl From<ExitStatus> for ExitCode {
    fn from(status: ExitStatus) -> Self {
        Self::from(status.code())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_worst_counts() {
        let all = [
            ExitStatus::AllWell,
            ExitStatus::Finding,
            ExitStatus::WrongInput,
            ExitStatus::CannotReadOrWrite,
        ];
        for (a, code) in all.iter().zip(0..) {
            assert_eq!(a.code(), code);
            for b in &all {
                assert_eq!(a.and(*b).code(), a.code().max(b.code()));
            }
        }
    }
}
