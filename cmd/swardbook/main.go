// Command swardbook keeps a turf manager's weather record and work log, and
// says in a terminal what is due and when.
//
// It wires the rooms together, one file a subcommand, and holds no logic of
// its own.
package main

import (
	"context"
	"errors"
	"io"
	"os"
	"os/signal"
	"syscall"
	_ "time/tzdata" // a fresh machine may have no time zones

	"github.com/spf13/cobra"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	code := run(ctx, os.Args[1:], os.Getenv, os.Stdin, os.Stdout, os.Stderr)
	stop()
	os.Exit(code)
}

// errFailed says that a command failed and has already said why.
var errFailed = errors.New("a command failed")

// run is the program: it returns the exit status, 1 if anything failed.
func run(ctx context.Context, args []string, env func(string) string, in io.Reader, out, errOut io.Writer) int {
	root := &cobra.Command{
		Use:           "swardbook",
		Short:         "Plan feeding, growth regulation and cutting from temperature",
		SilenceErrors: true,
		SilenceUsage:  true,
	}
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(out)
	root.SetErr(errOut)
	started := false // flags and arguments were understood
	root.PersistentPreRun = func(*cobra.Command, []string) { started = true }
	root.AddCommand(demoCommand(), chatCommand(env), importCommand(env), exportCommand(env), serveCommand(env), versionCommand())
	used, err := root.ExecuteContextC(ctx)
	if err == nil {
		return 0
	}
	if !started {
		err = misused(used, err)
	}
	if !errors.Is(err, errFailed) {
		tell(errOut, err)
	}
	return 1
}
