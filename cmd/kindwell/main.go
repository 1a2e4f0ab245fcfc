// Command kindwell relates summaries of brain-state dynamics to questionnaires
// in cohorts of twins, siblings and parents. See the README for the job it
// does and docs/ for the manual.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM, syscall.SIGHUP)
	status := execute(ctx, os.Args[1:], os.Stdout, os.Stderr)
	stop()
	os.Exit(status)
}
