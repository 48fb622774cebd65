// Command keelfall asks whether the dense root of a thick arc could have dripped into
// the mantle in the time available, or was cut out along shear zones first.
package main

import (
	"context"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	os.Exit(Main(ctx, os.Args[1:], Streams{os.Stdout, os.Stderr}))
}
