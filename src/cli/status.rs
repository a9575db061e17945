//! The exit statuses of the program, in one place.

use std::process::ExitCode;

/// How a command ended; later ones are worse.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub enum Status {
    /// Done, and every requirement is met.
    #[default]
    Done,
    /// Done, but a requirement or a study's limit is not met.
    NotMet,
    /// The numerics gave up.
    GaveUp,
    /// The file or the command is at fault.
    Fault,
    /// Results could not be written.
    NotWritten,
    /// Interrupted from outside.
    Interrupted,
}

impl Status {
    /// The number that the shell sees.
    pub fn code(self) -> u8 {
        match self {
            Self::Done => 0,
            Self::NotMet => 1,
            Self::Fault => 2,
            Self::GaveUp => 3,
            Self::NotWritten => 4,
            Self::Interrupted => 130,
        }
    }
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        Self::from(status.code())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_worst_of_several_files_counts() {
        let worst = [Status::NotMet, Status::Fault, Status::Done].into_iter().max();
        assert_eq!(worst.map(Status::code), Some(2));
    }
}
