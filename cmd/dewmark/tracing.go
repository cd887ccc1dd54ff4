package main

import (
	"context"
	"log/slog"
	"time"

	"go.opentelemetry.io/otel"
	"go.opentelemetry.io/otel/trace"

	"dewmark/api/otlp"
)

// tracing returns a tracer if the environment asks for one, nil if not. The caller calls end, which sends what is left.
func tracing(ctx context.Context, log *slog.Logger) (tracer trace.Tracer, end func(), err error) {
	if !otlp.Wanted() {
		return nil, func() {}, nil
	}
	provider, err := otlp.NewProvider(ctx, release())
	if err != nil {
		return nil, nil, err
	}
	otel.SetErrorHandler(otel.ErrorHandlerFunc(func(err error) {
		log.LogAttrs(context.Background(), slog.LevelWarn, "tracing", slog.String("err", err.Error()))
	}))
	return provider.Tracer("dewmark"), func() {
		// The collector may be gone too; nobody waits for it for long.
		last, cancel := context.WithTimeout(context.WithoutCancel(ctx), 3*time.Second)
		defer cancel()
		if err := provider.Shutdown(last); err != nil {
			log.LogAttrs(last, slog.LevelWarn, "tracing", slog.String("err", err.Error()))
		}
	}, nil
}
