//! Ctrl-C: the first asks the work to end and keep what is finished, the second ends at once.

use super::status::Status;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// Set once the user asks the program to end.
#[derive(Clone, Debug, Default)]
pub struct Interrupt {
    flag: Arc<AtomicBool>,
}

impl Interrupt {
    /// Listens from now on; where the system does not allow it, Ctrl-C ends the program at once.
    pub fn listen() -> Self {
        let interrupt = Self::default();
        let flag = Arc::clone(&interrupt.flag);
        let _ = ctrlc::set_handler(move || {
            if flag.swap(true, Ordering::SeqCst) {
                std::process::exit(i32::from(Status::Interrupted.code()));
            }
        });
        interrupt
    }

    /// For the work that is to look at it.
    pub fn flag(&self) -> &AtomicBool {
        &self.flag
    }

    /// True when the user has asked.
    pub fn is_asked(&self) -> bool {
        self.flag.load(Ordering::SeqCst)
    }
}
