// Package sqlite keeps set-up, work log and weather record in one SQLite file,
// each team apart from the others. [Open] opens the file, [DB.Team] gives the
// handle of one team, and no method of that handle takes a team: there is no
// way to name another team's rows.
//
// It must not know what a chat server, a file format or a figure is, and it
// reads no clock: times come in with the planner.Stamp of each change. What a
// day's facts are is decided by planner.BuildDay; the package only calls it
// when readings or day rules change.
//
// Settings that move figures (day rules, grasses, settings of works and totals)
// are rows valid from a day that are added and never updated. Everything that
// is saved leaves a row in one change log, in the same transaction. A change
// that ends in an error leaves nothing behind, also when the machine stops in
// the middle of it.
package sqlite
