//! `/health`.

use crate::helpers::TestService;

#[test]
fn health_says_how_busy_the_service_is() {
    let service = TestService::start_with(|settings| settings.limits.computing = 3);
    let health = service.get("/health").good().json();
    assert_eq!((&health["status"], &health["places_free"], &health["waiting"]), (&"ok".into(), &3.into(), &0.into()));
    assert_eq!(health["version"], env!("CARGO_PKG_VERSION"));
}
