//! With a token file, every call under /v1 needs a token; the file is read again on SIGHUP.

use std::time::{Duration, Instant};

use http::StatusCode;

use crate::ask::{get_it, get_with, service, state};
use crate::server::{Scratch, Server, write_file};

#[tokio::test]
async fn calls_under_v1_need_a_token() {
    let scratch = Scratch::new("tokens");
    let file = scratch.file("tokens");
    write_file(&file, "first-token\n\nsecond.token=\n");
    let service = service(&state(|settings| settings.bearer_token_file = Some(file)));
    for wrong in ["", "Bearer", "Bearer ", "Bearer first-toke", "Bearer first-token2", "Basic first-token"] {
        for path in ["/v1/test", "/v1/nothing", "/v1"] {
            let refused = get_with(&service, path, &[("authorization", wrong)]).await;
            assert_eq!(refused.status, StatusCode::UNAUTHORIZED, "{path} {wrong:?}");
            assert_eq!(refused.header("www-authenticate"), "Bearer");
            assert_eq!(refused.problem()["type"], "/problems/unauthorized");
        }
    }
    assert_eq!(get_it(&service, "/v1/test").await.status, StatusCode::UNAUTHORIZED);
    for right in ["Bearer first-token", "bearer second.token="] {
        assert_eq!(get_with(&service, "/v1/test", &[("authorization", right)]).await.status, StatusCode::OK);
    }
    for open in
        ["/health/live", "/health/ready", "/metrics", "/version", "/openapi.json", "/docs/", "/problems"]
    {
        assert_eq!(get_it(&service, open).await.status, StatusCode::OK, "{open}");
    }
}

#[test]
fn a_hang_up_reads_the_tokens_again_and_a_bad_file_keeps_the_old() {
    let scratch = Scratch::new("hang-up");
    let file = scratch.file("tokens");
    write_file(&file, "old-token\n");
    let server = Server::start("hang-up-server", &["--bearer-token-file", file.to_str().unwrap()]);
    let status =
        |token: &str| server.get("/v1/nothing", &format!("Authorization: Bearer {token}\r\n")).status;
    assert_eq!((status("old-token"), status("new-token")), (404, 401));

    write_file(&file, "new-token\n");
    server.signal("HUP");
    let begun = Instant::now();
    while status("new-token") != 404 {
        assert!(begun.elapsed() < Duration::from_secs(10));
        std::thread::sleep(Duration::from_millis(5));
    }
    assert_eq!(status("old-token"), 401);

    write_file(&file, "\n");
    server.signal("HUP");
    while !server.log().contains("kept as they were") {
        assert!(begun.elapsed() < Duration::from_secs(20));
        std::thread::sleep(Duration::from_millis(5));
    }
    assert_eq!((status("new-token"), status("old-token")), (404, 401));
    assert!(
        !server.log().contains("old-token") && !server.log().contains("new-token"),
        "no secrets in the log"
    );
}
