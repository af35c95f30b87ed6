//! Where work runs: small work where the request arrived, all other on threads of its own, and no panic gets out.

use std::panic::{AssertUnwindSafe, catch_unwind};

use actix_web::web;

use super::admission::Admission;
use crate::problem::{Problem, ProblemKind};

/// Does the work here and now. For work that takes less time than handing it over would.
pub fn inline<T>(work: impl FnOnce() -> Result<T, Problem>) -> Result<T, Problem> {
    catch_unwind(AssertUnwindSafe(work)).unwrap_or_else(|_| Err(broken()))
}

/// Does the work on a thread of its own once there is a place. The place is held until the work is done, even if
/// the client has gone away meanwhile.
pub async fn elsewhere<T: Send + 'static>(
    admission: &Admission,
    work: impl FnOnce() -> Result<T, Problem> + Send + 'static,
) -> Result<T, Problem> {
    let place = admission.enter().await?;
    let done = web::block(move || {
        let _place = place;
        inline(work)
    });
    done.await.unwrap_or_else(|_| Err(broken()))
}

/// Something went wrong that is not the person's fault; what it was is not shown.
pub fn broken() -> Problem {
    Problem::new(ProblemKind::Broken, "broken", "something went wrong on our side")
        .help("The request was not at fault; please report what was sent.")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_panic_becomes_a_problem() {
        let problem = inline::<()>(|| panic!("on purpose")).unwrap_err();
        assert_eq!((problem.kind, problem.code), (ProblemKind::Broken, "broken"));
    }
}
