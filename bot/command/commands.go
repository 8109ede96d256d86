package command

import "log/slog"

// Table is the table of every command that the desk answers. The log takes
// what a user is not shown; nil throws it away.
func (d Desk) Table(log *slog.Logger) Table {
	commands := []Command{
		d.briefing(), d.due(), d.done(), d.whatIf(), d.sheetGet(), d.help(),
		d.logList(), d.logAmend(), d.logUndo(),
		d.weatherDay(), d.weatherFile(), d.weatherAhead(), d.weatherUndo(),
		d.season(), d.whyCompare(),
	}
	commands = append(commands, d.setupSite()...)
	commands = append(commands, d.setupStation()...)
	commands = append(commands, d.setupSurface()...)
	commands = append(commands, d.setupWork()...)
	commands = append(commands, d.setupTotal()...)
	commands = append(commands, d.setupClosed()...)
	commands = append(commands, d.setupPost()...)
	commands = append(commands, d.setupPeople()...)
	commands = append(commands, d.setupChannel()...)
	commands = append(commands, d.setupData()...)
	return New(log, commands...)
}
