//! A panic is a defect of ours: it is caught, told plainly, and ends nothing but the study at hand.

use std::any::Any;
use std::cell::RefCell;
use std::panic::{AssertUnwindSafe, catch_unwind};

thread_local! {
    /// Message and place of the last panic of this thread.
    static LAST: RefCell<Option<String>> = const { RefCell::new(None) };
}

/// From now on a panic prints nothing by itself; [`guard`] hands its message on.
pub(super) fn keep_places_of_panics() {
    std::panic::set_hook(Box::new(|panic| {
        let place = panic.location().map_or_else(String::new, |place| format!(" ({place})"));
        let message = text_of(panic.payload());
        LAST.with_borrow_mut(|last| *last = Some(format!("{message}{place}")));
    }));
}

/// Does `work`; where it panics, gives what the panic said.
///
/// What `work` has changed by then must not be used; all our stages hand out their results by value.
pub(super) fn guard<T>(work: impl FnOnce() -> T) -> Result<T, String> {
    LAST.with_borrow_mut(|last| *last = None);
    catch_unwind(AssertUnwindSafe(work)).map_err(|payload| {
        // A panic that rayon has brought over from another thread has left its place there.
        LAST.with_borrow_mut(Option::take).unwrap_or_else(|| text_of(payload.as_ref()))
    })
}

fn text_of(payload: &(dyn Any + Send)) -> String {
    let text = payload.downcast_ref::<&str>().copied();
    text.or_else(|| payload.downcast_ref::<String>().map(String::as_str)).unwrap_or("no message").to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn work_that_panics_gives_its_message() {
        let outcome = guard(|| {
            let nothing: Vec<u8> = Vec::new();
            nothing[std::hint::black_box(3)]
        });
        assert!(outcome.unwrap_err().contains("index out of bounds"), "message");
        assert_eq!(guard(|| 7), Ok(7));
    }
}
