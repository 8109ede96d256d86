package sqlite

import (
	"errors"
	"fmt"

	"modernc.org/sqlite"
	sqlite3 "modernc.org/sqlite/lib"

	"swardbook/planner"
)

// code is the driver's extended result code of the error, 0 when it is not the
// driver's.
func code(err error) int {
	var typed *sqlite.Error
	if errors.As(err, &typed) {
		return typed.Code()
	}
	return 0
}

// primary keeps the part of an extended result code that names the fault.
const primary = 0xff

// storeError names the step in an error, and turns what a person can act on
// into a *planner.Problem that names the file. A Problem passes as it is.
func storeError(name, step string, err error) error {
	if err == nil {
		return nil
	}
	var problem *planner.Problem
	if errors.As(err, &problem) {
		return err
	}
	cause := fmt.Errorf("%s: %w", step, err)
	file := "the file of the store " + name
	switch code(err) & primary {
	case sqlite3.SQLITE_BUSY, sqlite3.SQLITE_LOCKED:
		return planner.Problemf(planner.Busy, "another program is writing to %s", file).
			WithHint("Try again in a few seconds; nothing was changed.").WithCause(cause)
	case sqlite3.SQLITE_FULL:
		return planner.Problemf(planner.Refused, "the disk is full").
			WithHint("Make room on it and try again; nothing was changed.").WithCause(cause)
	case sqlite3.SQLITE_READONLY, sqlite3.SQLITE_CANTOPEN, sqlite3.SQLITE_PERM:
		return planner.Problemf(planner.Refused, "%s cannot be opened for writing", file).
			WithHint("Check that you may write to the file and to its folder.").WithCause(cause)
	case sqlite3.SQLITE_NOTADB, sqlite3.SQLITE_CORRUPT:
		return planner.Problemf(planner.Refused, "%s is damaged or is no database", file).
			WithHint("Name another file, or put the newest copy in its place.").WithCause(cause)
	}
	return cause
}

// notFound is the problem of an id that the team does not have.
func notFound(kind string, id int64) error {
	return planner.Problemf(planner.NotFound, "there is no %s %d", kind, id).
		WithHint("It may have been dropped; list what is set up and try again.")
}
