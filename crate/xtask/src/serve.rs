//! The page served on this machine only.

use crate::dist::Dist;
use crate::workspace::Workspace;
use anyhow::{Context, Result, bail};
use axum::Router;
use axum::http::header::{CACHE_CONTROL, CONTENT_TYPE};
use axum::routing::get;
use std::net::Ipv4Addr;
use tokio::net::TcpListener;

/// How many ports are tried, the asked one first.
const TRIES: u16 = 50;

/// Serves until it is stopped.
pub fn serve(workspace: &Workspace, dist: Dist, port: u16) -> Result<()> {
    tokio::runtime::Builder::new_current_thread().enable_io().build()?.block_on(async {
        let listener = listen(port).await?;
        println!("\nThe page:  http://{}/", listener.local_addr()?);
        println!("Embedded:  http://{}/sample_host.html", listener.local_addr()?);
        println!("The file:  {}", workspace.dist.join("inward.html").display());
        println!("Ctrl-C ends this.");
        Ok(axum::serve(listener, router(dist)).await?)
    })
}

async fn listen(port: u16) -> Result<TcpListener> {
    for port in port..port.saturating_add(TRIES) {
        match TcpListener::bind((Ipv4Addr::LOCALHOST, port)).await {
            Ok(listener) => return Ok(listener),
            Err(error) if error.kind() == std::io::ErrorKind::AddrInUse => {}
            Err(error) => return Err(error).with_context(|| format!("port {port}")),
        }
    }
    bail!("port {port} and those after it are taken; give another by --port")
}

fn router(dist: Dist) -> Router {
    Router::new()
        .route("/", file("text/html; charset=utf-8", dist.page.clone()))
        .route("/inward.html", file("text/html; charset=utf-8", dist.page))
        .route("/sample_host.html", file("text/html; charset=utf-8", dist.host))
        .route("/engine/inward.mjs", file("text/javascript; charset=utf-8", dist.module))
}

fn file(kind: &'static str, text: String) -> axum::routing::MethodRouter {
    get(move || async move { ([(CONTENT_TYPE, kind), (CACHE_CONTROL, "no-store")], text) })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_taken_port_gives_way_to_the_next() {
        let runtime = tokio::runtime::Builder::new_current_thread().enable_io().build().unwrap();
        runtime.block_on(async {
            let first = listen(18_300).await.unwrap().local_addr().unwrap();
            let taken = TcpListener::bind(first).await.unwrap();
            let second = listen(first.port()).await.unwrap().local_addr().unwrap();
            assert!(second.ip().is_loopback() && second.port() > first.port());
            drop(taken);
        });
    }
}
