// Command shearprint reads the surface pattern of wall shear stress: its critical points, the lines that separate and
// attach, and the ledger that balances them. See `shearprint --help`.
package main

import (
	"context"
	"os"
	"os/signal"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	context.AfterFunc(ctx, stop) // a second Ctrl-C ends at once
	os.Exit(run(ctx, os.Args[1:], os.Stdout, os.Stderr))
}
