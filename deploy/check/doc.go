// Package check tests the files that deploy dewmark against the software that reads them, without a cluster, an engine or a
// network. Kubernetes manifests are built by kustomize and decoded strictly into the types of the API server, the compose
// file is loaded by the library of the Compose Specification, and what the objects say of each other is compared. It is a
// module of its own, so that the service depends on none of these:
//
//	go test -C deploy/check ./...
package check
