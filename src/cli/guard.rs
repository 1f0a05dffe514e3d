//! Faults of the program itself: what panics is told and costs no more than the work that it happened in.

use std::any::Any;
use std::cell::RefCell;
use std::panic::{AssertUnwindSafe, PanicHookInfo, catch_unwind, set_hook, take_hook};
use std::sync::Once;

thread_local! {
    /// How many guards this thread is within, and where the last panic within one was.
    static WITHIN: RefCell<(usize, String)> = const { RefCell::new((0, String::new())) };
}

static HOOK: Once = Once::new();

/// Does some work; what panics in it becomes a message. What the work was changing may then be half changed.
pub(super) fn guarded<T>(work: impl FnOnce() -> T) -> Result<T, String> {
    HOOK.call_once(|| {
        let before = take_hook();
        set_hook(Box::new(move |info| {
            if !noted(info) {
                before(info);
            }
        }));
    });
    enter(1);
    let done = catch_unwind(AssertUnwindSafe(work));
    let place = leave();
    done.map_err(|payload| {
        let what = message(payload.as_ref());
        format!("a fault of railworthy itself, please report it with the file: {what} ({place})")
    })
}

fn enter(more: usize) {
    WITHIN.with_borrow_mut(|(depth, _)| *depth += more);
}

fn leave() -> String {
    WITHIN.with_borrow_mut(|(depth, place)| {
        *depth = depth.saturating_sub(1);
        place.clone()
    })
}

/// Keeps the place of a panic within a guard: its text may come from a file, and must not reach a terminal as it is.
fn noted(info: &PanicHookInfo<'_>) -> bool {
    let place = info.location().map_or_else(String::new, |at| format!("{}:{}", at.file(), at.line()));
    WITHIN.with(|within| match within.try_borrow_mut() {
        Ok(mut within) if within.0 > 0 => {
            within.1 = place;
            true
        }
        _ => false,
    })
}

fn message(payload: &(dyn Any + Send)) -> String {
    let text = payload.downcast_ref::<String>().map(String::as_str);
    text.or_else(|| payload.downcast_ref::<&str>().copied()).unwrap_or("no message").to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_panic_becomes_a_message_with_its_place() {
        let told = guarded(|| -> u8 { panic!("lost {}", 7) }).unwrap_err();
        assert!(told.contains("lost 7 (") && told.contains("guard.rs:"), "{told}");
        assert_eq!(guarded(|| 3), Ok(3));
        let inner = guarded(|| guarded(|| -> u8 { panic!("within") }).is_err());
        assert_eq!(inner, Ok(true));
    }
}
