package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"time"

	"github.com/schollz/progressbar/v3"
	"github.com/spf13/cobra"

	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/bot/terminal"
	"swardbook/planner"
)

// importing is the import command's flags.
type importing struct {
	where                                      place
	site, station, units, clock, dates, sensor string
	watch                                      string
	every                                      time.Duration
}

// importCommand reads station files: the lead's /weather file, for scripts.
func importCommand(env func(string) string) *cobra.Command {
	var how importing
	cmd := &cobra.Command{
		Use:   "import FILE|FOLDER…",
		Short: "Read station files into the weather record",
		Long: "Reads each file, and every file of a folder, goes on after one that is refused, and then ends with status 1.\n" +
			"With --watch it waits for files in a folder instead: a file that is complete is read and moved to done/ there, or to\n" +
			"refused/ with the reason beside it.",
		Example: "  swardbook import --db course.db station.csv\n  swardbook import --db course.db archive/\n  swardbook import --db course.db --watch drop/",
		RunE: func(cmd *cobra.Command, args []string) error {
			switch {
			case how.watch != "" && len(args) > 0:
				return planner.Problemf(planner.Invalid, "Either files or --watch, not both.")
			case how.watch == "" && len(args) == 0:
				return planner.Problemf(planner.Missing, "Which file?").WithHint("Name one, like: swardbook import --db course.db station.csv")
			}
			return how.run(cmd, env, args)
		},
	}
	how.where.addTo(cmd, env)
	flags := cmd.Flags()
	flags.StringVar(&how.site, "site", "", "site; not needed with one")
	flags.StringVar(&how.station, "station", "", "station; not needed with one")
	flags.StringVar(&how.units, "units", "", "the files' unit where they do not say: c or f")
	flags.StringVar(&how.clock, "clock", "", "the files' times: standard, wall (with summer time), utc, or an offset like -05:00")
	flags.StringVar(&how.dates, "dates", "", "the files' dates: d/m/y, m/d/y or y/m/d; of METAR reports the month of the first, 2021-07")
	flags.StringVar(&how.sensor, "sensor", "", "which sensor counts, where a file has several")
	flags.StringVar(&how.watch, "watch", "", "a folder to wait for files in")
	flags.DurationVar(&how.every, "every", 2*time.Second, "how often --watch looks")
	return cmd
}

func (i importing) run(cmd *cobra.Command, env func(string) string, args []string) (err error) {
	ctx := cmd.Context()
	house, err := open(ctx, i.where.db, i.where.team)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, house.close()) }()
	now, _ := clock("")
	table := house.table(cmd.ErrOrStderr())
	if i.watch != "" {
		request := func(path string) command.Request {
			at, local := now()
			return command.Request{Caller: caller(command.Lead, env), Now: at, LocalClock: local, Line: i.line(path), OpenFile: openPlain}
		}
		return watch(ctx, i.watch, i.every, cmd.OutOrStdout(), func(ctx context.Context, path string) (string, error) {
			answer, err := table.Run(ctx, request(path))
			return countsOf(answer), err
		})
	}
	files, err := filesOf(args)
	if err != nil {
		return err
	}
	return i.all(ctx, files, cmd.OutOrStdout(), cmd.ErrOrStderr(), terminal.Session{
		Table: table, Caller: caller(command.Lead, env), Now: now, Width: columnsOf(cmd.OutOrStdout()), Reword: asFlags,
	})
}

// all reads the files one after another; of several it lists at the end what
// became of each.
func (i importing) all(ctx context.Context, files []string, out, errOut io.Writer, session terminal.Session) error {
	failed := 0
	var list strings.Builder
	for _, file := range files {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		var told bytes.Buffer
		session.Out = &told
		result, ok := i.one(ctx, session, file, errOut)
		if !ok {
			failed++
			message, _ := reply.Wrong(result.Err)
			fmt.Fprintf(&list, "%s: refused. %s\n", file, asFlags(message))
			continue
		}
		fmt.Fprintf(&list, "%s: read, %s\n", file, rowsOf(result.Reply))
		if len(files) > 1 {
			fmt.Fprintf(out, "%s:\n", file)
			fmt.Fprintln(&told)
		}
		if _, err := told.WriteTo(out); err != nil {
			return fmt.Errorf("tell what was read: %w", err)
		}
	}
	if len(files) > 1 {
		fmt.Fprintf(out, "%s%d files: %d read, %d refused.\n", list.String(), len(files), len(files)-failed, failed)
	}
	if failed > 0 {
		return errFailed
	}
	return nil
}

// one reads one file, its progress shown where a person watches.
func (i importing) one(ctx context.Context, session terminal.Session, file string, errOut io.Writer) (terminal.Result, bool) {
	var wrong bytes.Buffer
	session.Err = &wrong
	if isTerminal(errOut) {
		bar := progressbar.NewOptions(-1, progressbar.OptionSetWriter(errOut), progressbar.OptionSetDescription(filepath.Base(file)+", rows"),
			progressbar.OptionShowCount(), progressbar.OptionThrottle(200*time.Millisecond), progressbar.OptionClearOnFinish())
		// A bar that cannot be drawn is no reason to stop.
		session.Progress = func(rows int) { _ = bar.Set(rows) }
		defer func() { _ = bar.Finish() }()
	}
	result, ok := session.Do(ctx, i.line(file))
	if !ok {
		fmt.Fprintf(errOut, "%s:\n%s", file, wrong.String())
	}
	return result, ok
}

// rowsOf tells the rows of a file that was read in a line: "30 rows, 24 of them
// new"; those that were refused too.
func rowsOf(answer reply.Reply) string {
	counts := map[string]int{}
	for _, figure := range answer.Figures {
		if name, ok := strings.CutPrefix(figure.Key, "import."); ok {
			counts[name] = int(figure.Value)
		}
	}
	rows := counts["new"] + counts["changed"] + counts["same"]
	text := fmt.Sprintf("%d rows", rows)
	if rows == 1 {
		text = "1 row"
	}
	if counts["new"] < rows {
		text += fmt.Sprintf(", %d of them new", counts["new"])
	}
	if counts["refused"] > 0 {
		text += fmt.Sprintf("; %d more refused", counts["refused"])
	}
	return text
}

// chatLine is a line that has a command of the chat in it.
var chatLine = regexp.MustCompile(`(?:^|\s)/[a-z]`)

// optionPattern is an option of /weather file that is a flag of the import.
var optionPattern = regexp.MustCompile(`\b(units|clock|dates|sensor|station|site):("(?:[^"\\]|\\.)*"|[^\s"]+)`)

// asFlags writes the options that a text tells to type as the flags that the
// shell's import takes instead: dates:d/m/y is --dates d/m/y. A line with a
// command of the chat stays as it is.
func asFlags(text string) string {
	lines := strings.Split(text, "\n")
	for i, line := range lines {
		if !chatLine.MatchString(line) {
			lines[i] = optionPattern.ReplaceAllString(line, "--$1 $2")
		}
	}
	return strings.Join(lines, "\n")
}

// line is the command line for a file.
func (i importing) line(file string) string {
	pairs := []command.Pair{{Name: "file", Value: file}}
	for _, option := range []command.Pair{
		{Name: "units", Value: i.units}, {Name: "clock", Value: i.clock}, {Name: "dates", Value: i.dates},
		{Name: "sensor", Value: i.sensor}, {Name: "station", Value: i.station}, {Name: "site", Value: i.site},
	} {
		if option.Value != "" {
			pairs = append(pairs, option)
		}
	}
	return command.Line("weather file", pairs...)
}

// filesOf lists the files named, and those of the folders named with theirs,
// by name; hidden ones are left out. What is not there is left to be told when
// it is read.
func filesOf(args []string) (files []string, err error) {
	for _, arg := range args {
		if info, err := os.Stat(arg); err != nil || !info.IsDir() {
			files = append(files, arg)
			continue
		}
		err := filepath.WalkDir(arg, func(path string, entry fs.DirEntry, err error) error {
			hidden := strings.HasPrefix(entry.Name(), ".") && path != arg
			switch {
			case err != nil:
				return err
			case entry.IsDir() && hidden:
				return fs.SkipDir
			case entry.Type().IsRegular() && !hidden:
				files = append(files, path)
			}
			return nil
		})
		if err != nil {
			return nil, planner.Problemf(planner.Refused, "the folder %s cannot be read", arg).WithCause(err).WithHint("See that you may read it.")
		}
	}
	if len(files) == 0 {
		return nil, planner.Problemf(planner.NotFound, "there is no file in %s", strings.Join(args, ", "))
	}
	return files, nil
}
