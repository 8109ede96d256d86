package main

import (
	"context"
	_ "embed"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"swardbook/bot/command"
	"swardbook/bot/terminal"
)

const (
	demoFolder = "swardbook-demo"
	// demoNow is the morning of the demo, by the site's clock; the invented
	// record ends the day before.
	demoNow = "2024-06-11T05:30"
)

// demoSetup sets the invented site up; demoTour is what the demo shows.
var (
	//go:embed demo_setup.txt
	demoSetup string
	//go:embed demo_tour.txt
	demoTour string
)

// demoCommand runs the main job on an invented site, with no set-up and no
// network.
func demoCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "demo",
		Short: "Show the main job on an invented site",
		Long: "Makes an invented site with more than three years of invented weather in ./" + demoFolder +
			", shows a briefing, what is due, a what-if and the two means compared, and says what to type next.",
		Args: cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			return demo(cmd.Context(), demoFolder, cmd.OutOrStdout(), cmd.ErrOrStderr())
		},
	}
}

func demo(ctx context.Context, folder string, out, errOut io.Writer) (err error) {
	database, station, err := demoFiles(folder, out)
	if err != nil {
		return err
	}
	if err := setUpDemo(ctx, database, station, errOut); err != nil {
		return err
	}
	house, err := open(ctx, database, "home")
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, house.close()) }()
	fmt.Fprintf(out, "Quillmere is an invented site with invented weather; the morning is %s.\n\n", demoNow)
	if err := house.play(ctx, demoTour, out, errOut); err != nil {
		return err
	}
	fmt.Fprintf(out, "\nKept in %s. Go on with, for example:\n", database)
	for _, next := range []string{"", " /help", " --as lead /setup work list", ` /whatif warmer:-4 warm-days:7`} {
		fmt.Fprintf(out, "  go run ./cmd/swardbook chat --db %s --now %s%s\n", database, demoNow, next)
	}
	return nil
}

// setUpDemo sets the invented site up on the station file.
func setUpDemo(ctx context.Context, database, station string, errOut io.Writer) (err error) {
	house, err := open(ctx, database, "home")
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, house.close()) }()
	script := strings.ReplaceAll(demoSetup, "STATION", `"`+filepath.ToSlash(station)+`"`)
	return house.play(ctx, script, io.Discard, errOut)
}

// play runs a script of the demo as its lead, on the demo's morning.
func (h *house) play(ctx context.Context, script string, out, errOut io.Writer) error {
	now, err := clock(demoNow)
	if err != nil {
		return err
	}
	session := terminal.Session{
		Table: h.table(errOut), Caller: command.Caller{ID: "demo", Name: "demo", Role: command.Lead},
		Now: now, Out: out, Err: errOut, Width: columnsOf(out),
	}
	if session.RunScript(ctx, strings.NewReader(script)) > 0 {
		return errFailed
	}
	return nil
}

// demoFiles makes the folder and the station file, and moves an earlier demo's
// database out of the way.
func demoFiles(folder string, out io.Writer) (database, station string, err error) {
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return "", "", fmt.Errorf("make the demo's folder: %w", err)
	}
	database = filepath.Join(folder, "demo.db")
	for _, part := range []string{"", "-wal", "-shm"} {
		err := os.Rename(database+part, database+part+".before")
		if err != nil && !errors.Is(err, fs.ErrNotExist) {
			return "", "", fmt.Errorf("move the earlier demo away: %w", err)
		}
		if err == nil && part == "" {
			fmt.Fprintf(out, "The earlier %s is now %s.before.\n", database, database)
		}
	}
	station = filepath.Join(folder, "quillmere.csv")
	file, err := os.Create(station)
	if err != nil {
		return "", "", fmt.Errorf("write the station file: %w", err)
	}
	return database, station, errors.Join(writeInvented(file, demoFirst, demoLast), file.Close())
}
