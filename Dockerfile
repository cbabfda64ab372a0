# Build: a static binary, stripped of symbols and of build paths.
FROM golang:1.26-bookworm AS build
WORKDIR /src
COPY go.mod go.sum ./
RUN go mod download
COPY . .
RUN CGO_ENABLED=0 go build -trimpath -ldflags="-s -w" -o /leeway ./server
RUN mkdir /data

# Run: nothing but the binary, as nobody, with its data in a volume.
FROM scratch
COPY --from=build /leeway /leeway
COPY --from=build --chown=65534:65534 /data /data
USER 65534:65534
VOLUME /data
EXPOSE 8321
HEALTHCHECK --interval=30s --timeout=3s --start-period=5s CMD ["/leeway", "health", "http://127.0.0.1:8321/healthz"]
ENTRYPOINT ["/leeway"]
CMD ["serve", "--addr", "0.0.0.0:8321", "--data", "/data"]
