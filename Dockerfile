# The newest patch release of Go. The builder's base is an argument, so that a machine without a registry can name an image
# of its own that holds Go.
ARG GO_IMAGE=golang:1.26
FROM ${GO_IMAGE} AS build
WORKDIR /src
COPY go.mod go.sum ./
RUN go mod download
COPY . .
ARG VERSION=devel
# Static, stripped and without build paths: the same sources and Go release give the same bytes.
RUN CGO_ENABLED=0 GOFLAGS=-buildvcs=false go build -tags nomsgpack,validator_novalidatefn -trimpath \
    -ldflags "-s -w -buildid= -X main.version=${VERSION}" -o /dewmark ./cmd/dewmark
# The licences of what the binary holds of others, most of which ask to go along with it.
RUN go run ./deploy/licences /dewmark >/licences.txt

FROM scratch
COPY --from=build /dewmark /dewmark
COPY --from=build /licences.txt /licences.txt
COPY LICENSE /LICENSE
# Any id without an account: nothing is written, so the root file system may be read-only.
USER 65532:65532
ENV DEWMARK_LISTEN=0.0.0.0:8080 DEWMARK_ADMIN_LISTEN=0.0.0.0:9090
EXPOSE 8080 9090
HEALTHCHECK --interval=10s --timeout=3s --start-period=10s CMD ["/dewmark", "probe"]
ENTRYPOINT ["/dewmark"]
CMD ["serve"]
