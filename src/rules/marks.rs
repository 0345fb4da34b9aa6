//! Where in a history each kind of line stands, so that the next or the last
//! one is found without walking: long logs are judged in linear time.

use crate::ledger::{Act, Line, TestKind, TestResult};

/// A kind of line that rules look for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Mark {
    Charge,
    Recovery,
    /// A repair that is for good.
    LastingRepair,
    InitialTestPassed,
    /// A follow-up verification test that counts.
    FollowUpThatCounts,
    LeakInspection,
    NormalOperation,
    PlanMade,
    Mothball,
}

const KINDS: usize = 9;

/// Indices of lines, by kind, ascending.
#[derive(Debug, Default)]
pub struct Marks([Vec<usize>; KINDS]);

impl Marks {
    /// `follow_up_counts` says of each line whether it is a follow-up test that counts.
    pub fn of(lines: &[&Line], follow_up_counts: &[bool]) -> Self {
        let mut marks = Self::default();
        for (index, line) in lines.iter().enumerate() {
            let mark = match line.act {
                Act::Charge { .. } => Mark::Charge,
                Act::Recover { .. } => Mark::Recovery,
                Act::Repair { temporary: false } => Mark::LastingRepair,
                Act::Test { kind: TestKind::InitialVerification, result: Some(TestResult::Pass), .. } => Mark::InitialTestPassed,
                Act::Test { kind: TestKind::LeakInspection, .. } => Mark::LeakInspection,
                Act::Test { .. } if follow_up_counts[index] => Mark::FollowUpThatCounts,
                Act::NormalOperation => Mark::NormalOperation,
                Act::PlanMade => Mark::PlanMade,
                Act::Mothball => Mark::Mothball,
                _ => continue,
            };
            marks.0[mark as usize].push(index);
        }
        marks
    }

    pub fn all(&self, mark: Mark) -> &[usize] {
        &self.0[mark as usize]
    }

    /// Those after a line; without one, all.
    pub fn after(&self, mark: Mark, line: Option<usize>) -> &[usize] {
        let all = self.all(mark);
        &all[line.map_or(0, |line| all.partition_point(|&index| index <= line))..]
    }

    pub fn next(&self, mark: Mark, line: Option<usize>) -> Option<usize> {
        self.after(mark, line).first().copied()
    }

    /// The last one before a line.
    pub fn last_before(&self, mark: Mark, line: usize) -> Option<usize> {
        let all = self.all(mark);
        all[..all.partition_point(|&index| index < line)].last().copied()
    }
}
