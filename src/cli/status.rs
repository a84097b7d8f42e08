//! The exit status of the command.

use std::process::ExitCode;

/// How a command ended, from the best to the worst.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub enum Status {
    /// 0: all is well.
    #[default]
    Well,
    /// 1: a criterion is not met or undecided, and the study does not expect that.
    NotInOrder,
    /// 2: a study or an argument is wrong.
    Wrong,
    /// 4: the machine failed (disk, memory), or halfstep has a defect.
    Failed,
}

impl Status {
    /// The worse of two: of several studies the worst decides.
    #[must_use]
    pub fn worst(self, other: Status) -> Status {
        std::cmp::max(self, other)
    }

    /// The number that the system sees.
    pub fn code(self) -> u8 {
        match self {
            Status::Well => 0,
            Status::NotInOrder => 1,
            Status::Wrong => 2,
            Status::Failed => 4,
        }
    }
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        ExitCode::from(status.code())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_worst_of_several_decides() {
        let all = [Status::NotInOrder, Status::Failed, Status::Well, Status::Wrong];
        assert_eq!(all.into_iter().fold(Status::Well, Status::worst).code(), 4);
        assert_eq!(Status::NotInOrder.worst(Status::Wrong).code(), 2);
        assert_eq!(Status::Well.worst(Status::NotInOrder).code(), 1);
    }
}
