package main

import (
	"context"
	"log/slog"
	"time"
)

// reloadable is what files say, which can change while the service runs.
type reloadable interface {
	// Reload reads the files again and reports whether they have changed.
	Reload() (changed bool, err error)
}

// lookEvery is how often files are read again. Reading some kilobytes costs nothing beside it, and unlike a notice of the
// operating system it works for every way of replacing a file.
const lookEvery = 5 * time.Second

// watch reloads what is called name until ctx ends. A failure is logged when it begins, not at every look.
func watch(ctx context.Context, log *slog.Logger, name string, r reloadable) {
	ticker := time.NewTicker(lookEvery)
	defer ticker.Stop()
	last := ""
	for {
		select {
		case <-ctx.Done():
			return
		case <-ticker.C:
		}
		switch changed, err := r.Reload(); {
		case err != nil && err.Error() != last:
			last = err.Error()
			log.LogAttrs(ctx, slog.LevelError, "not reloaded", slog.String("what", name), slog.String("err", last))
		case changed:
			last = ""
			log.LogAttrs(ctx, slog.LevelInfo, "reloaded", slog.String("what", name))
		}
	}
}
