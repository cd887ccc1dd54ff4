package main

import (
	"cmp"
	"runtime/debug"
)

// version is set by the build: -ldflags "-X main.version=1.2.3".
var version string

// release names this build: its version, or else what the Go tool recorded of the source.
func release() string {
	if version != "" {
		return version
	}
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown"
	}
	return cmp.Or(info.Main.Version, "unknown")
}
