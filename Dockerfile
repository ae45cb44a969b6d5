# syntax=docker/dockerfile:1
# A static binary on an empty image: nothing to update but the service itself.
FROM rust:1.95-slim AS build
RUN rustup target add x86_64-unknown-linux-musl \
    && apt-get update \
    && apt-get install --yes --no-install-recommends musl-tools \
    && rm -rf /var/lib/apt/lists/*
WORKDIR /build
# Dependencies first, so that they are built again only when they change.
COPY Cargo.toml Cargo.lock ./
COPY benches benches
COPY experiments experiments
RUN mkdir src \
    && echo 'fn main() {}' > src/main.rs \
    && touch src/lib.rs \
    && cargo build --release --locked --target x86_64-unknown-linux-musl
COPY src src
RUN touch src/lib.rs src/main.rs \
    && cargo build --release --locked --target x86_64-unknown-linux-musl --bin dribble-risk

FROM scratch
LABEL org.opencontainers.image.title="dribble-risk" \
      org.opencontainers.image.description="Tells whether a lip will dribble, how surely, and what to change." \
      org.opencontainers.image.licenses="MIT"
COPY --from=build /build/target/x86_64-unknown-linux-musl/release/dribble-risk /dribble-risk
COPY LICENSE /LICENSE
USER 65532:65532
ENV DRIBBLE_RISK_LISTEN=0.0.0.0:8080 \
    DRIBBLE_RISK_LOG_FORMAT=json
EXPOSE 8080
HEALTHCHECK --interval=10s --timeout=5s --start-period=2s --retries=3 CMD ["/dribble-risk", "probe"]
STOPSIGNAL SIGTERM
ENTRYPOINT ["/dribble-risk"]
