package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"log/slog"
	"os"
	"strings"
	"syscall"
	"time"

	"github.com/spf13/cobra"
	"golang.org/x/term"

	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/planner"
	"swardbook/planner/outlook"
	"swardbook/storage"
	"swardbook/storage/sqlite"
)

// platform names the teams of the terminal among those of chat servers.
const platform = "terminal"

// house is the program put together for one team.
type house struct {
	db   *sqlite.DB
	desk command.Desk
}

// open puts the rooms together on a database file, which is made when it is
// not there.
func open(ctx context.Context, path, team string) (*house, error) {
	if path == "" {
		return nil, planner.Problemf(planner.Missing, "Which database?").
			WithHint("Add --db course.db (it is made when it is not there), or set SWARDBOOK_DB.")
	}
	db, err := sqlite.Open(ctx, path)
	if err != nil {
		return nil, err
	}
	on := platform
	if server, ok := strings.CutPrefix(team, "chat:"); ok {
		on, team = chatPlatform, server
	}
	kept, err := db.Team(ctx, on, team)
	if err != nil {
		return nil, errors.Join(err, db.Close())
	}
	return &house{db, deskOf(kept)}, nil
}

// deskOf is the desk that answers commands from what is kept of a team.
func deskOf(kept *sqlite.Team) command.Desk {
	book := planner.NewBook(kept, kept, storage.NewImporter(kept), outlook.Simple{})
	return command.Desk{Book: book, Data: kept, Posts: kept, Sheets: kept, Version: version()}
}

func (h *house) close() error { return h.db.Close() }

// table is the command table; what users are not shown goes to the error
// output.
func (h *house) table(errOut io.Writer) command.Table {
	return h.desk.Table(slog.New(slog.NewTextHandler(errOut, nil)))
}

// place are the settings that every subcommand on a database takes: flags,
// then the environment.
type place struct{ db, team string }

func (p *place) addTo(cmd *cobra.Command, env func(string) string) {
	team := env("SWARDBOOK_TEAM")
	if team == "" {
		team = "home"
	}
	cmd.Flags().StringVar(&p.db, "db", env("SWARDBOOK_DB"), "database file, made when it is not there (SWARDBOOK_DB)")
	cmd.Flags().StringVar(&p.team, "team", team, "team whose book it is; chat:NUMBER for that of a chat server (SWARDBOOK_TEAM)")
}

// clock is the time a session goes by: the machine's, or a fixed one by the
// site's own clock.
func clock(text string) (func() (time.Time, bool), error) {
	if text == "" {
		return func() (time.Time, bool) { return time.Now(), false }, nil
	}
	for _, layout := range []string{"2006-01-02T15:04", "2006-01-02T15:04:05", "2006-01-02"} {
		if at, err := time.Parse(layout, text); err == nil {
			return func() (time.Time, bool) { return at, true }, nil
		}
	}
	return nil, planner.Problemf(planner.Invalid, "--now %q is not a time.", text).
		WithHint("Write the site's local time like 2013-07-01T05:30.")
}

// role reads the role a terminal user acts in.
func role(text string) (command.Role, error) {
	for _, role := range []command.Role{command.Crew, command.Lead} {
		if text == role.String() {
			return role, nil
		}
	}
	return command.Crew, planner.Problemf(planner.Invalid, "--as %q is not a role.", text).WithHint("Use --as crew or --as lead.")
}

// caller is the person at the terminal.
func caller(as command.Role, env func(string) string) command.Caller {
	for _, key := range []string{"USER", "LOGNAME", "USERNAME"} {
		if name := env(key); name != "" {
			return command.Caller{ID: "terminal:" + name, Name: name, Role: as}
		}
	}
	return command.Caller{ID: "terminal", Name: "terminal", Role: as}
}

// misused is the problem of flags or arguments that a subcommand does not take.
func misused(used *cobra.Command, err error) error {
	reason, _, _ := strings.Cut(err.Error(), "\n") // what follows is a list of its own
	return planner.Problemf(planner.Invalid, "%s", reason).WithHint("Type %s --help to see what there is.", used.CommandPath()).WithCause(err)
}

// tell writes an error for a person: what is wrong, then what to do. Errors of
// the system on a path are told in words of ours, others in its own.
func tell(w io.Writer, err error) {
	var problem *planner.Problem
	if !errors.As(err, &problem) {
		problem = ofSystem(err)
		err = problem
	}
	message, hint := reply.Wrong(err)
	if problem.Kind == planner.Internal {
		message, hint = reply.Sentence(problem.Message), reply.Sentence(problem.Hint)
	}
	fmt.Fprintln(w, strings.TrimRight(message+"\n"+hint, "\n"))
}

// ofSystem is the problem of an error that is no Problem yet.
func ofSystem(err error) *planner.Problem {
	var path *fs.PathError
	switch {
	case !errors.As(err, &path):
		return planner.Problemf(planner.Internal, "%v", err).WithCause(err)
	case errors.Is(err, fs.ErrNotExist):
		return planner.Problemf(planner.NotFound, "there is no file or folder %s", path.Path).WithHint("Correct the path.").WithCause(err)
	case errors.Is(err, fs.ErrPermission):
		return planner.Problemf(planner.Refused, "the path %s cannot be used", path.Path).WithHint("See that you may read and write there.").WithCause(err)
	case errors.Is(err, syscall.ENOTDIR):
		return planner.Problemf(planner.NotFound, "the path %s has a file where a folder is needed", path.Path).WithHint("Correct the path.").WithCause(err)
	case errors.Is(err, syscall.EISDIR):
		return planner.Problemf(planner.Refused, "the path %s is a folder, not a file", path.Path).WithHint("Name a file in it.").WithCause(err)
	}
	return planner.Problemf(planner.Refused, "the path %s cannot be used: %v", path.Path, path.Err).WithCause(err)
}

// mostColumns bounds the text of a wide terminal: longer lines are hard to read.
const mostColumns = 80

// columnsOf is the width of a person's terminal, at most mostColumns; 0, a
// phone's, where the stream is none.
func columnsOf(stream any) int {
	file, ok := stream.(*os.File)
	if !ok || !isTerminal(stream) {
		return 0
	}
	columns, _, err := term.GetSize(int(file.Fd()))
	if err != nil || columns <= 0 {
		return 0
	}
	return min(columns, mostColumns)
}

// isTerminal reports whether the stream is a person's terminal.
func isTerminal(stream any) bool {
	file, ok := stream.(*os.File)
	return ok && term.IsTerminal(int(file.Fd()))
}
