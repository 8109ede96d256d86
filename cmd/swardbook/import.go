package main

import (
	"bytes"
	"errors"
	"fmt"

	"github.com/spf13/cobra"

	"swardbook/bot/command"
	"swardbook/bot/terminal"
)

// importCommand reads station files: the lead's /weather file, for scripts.
func importCommand(env func(string) string) *cobra.Command {
	var where place
	var site, station, units string
	cmd := &cobra.Command{
		Use:     "import FILE…",
		Short:   "Read station files into the weather record",
		Long:    "Reads each file, goes on after one that is refused, and then ends with status 1.",
		Example: "  swardbook import --db course.db station.csv",
		Args:    cobra.MinimumNArgs(1),
		RunE: func(cmd *cobra.Command, args []string) (err error) {
			house, err := open(cmd.Context(), where.db, where.team)
			if err != nil {
				return err
			}
			defer func() { err = errors.Join(err, house.close()) }()
			now, _ := clock("")
			failed := false
			for _, file := range args {
				pairs := []command.Pair{{Name: "file", Value: file}}
				for _, option := range []command.Pair{{Name: "units", Value: units}, {Name: "station", Value: station}, {Name: "site", Value: site}} {
					if option.Value != "" {
						pairs = append(pairs, option)
					}
				}
				var wrong bytes.Buffer
				session := terminal.Session{
					Table: house.table(cmd.ErrOrStderr()), Caller: caller(command.Lead, env), Now: now,
					Out: cmd.OutOrStdout(), Err: &wrong,
				}
				if !session.RunLine(cmd.Context(), command.Line("weather file", pairs...)) {
					failed = true
					fmt.Fprintf(cmd.ErrOrStderr(), "%s:\n%s", file, wrong.String())
				}
			}
			if failed {
				return errFailed
			}
			return nil
		},
	}
	where.addTo(cmd, env)
	cmd.Flags().StringVar(&site, "site", "", "site; not needed with one")
	cmd.Flags().StringVar(&station, "station", "", "station; not needed with one")
	cmd.Flags().StringVar(&units, "units", "", "the files' unit where their header does not say: c or f")
	return cmd
}
