package main

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"

	"github.com/spf13/cobra"

	"swardbook/planner"
)

// exportCommand writes a station's record as a file that import reads back.
func exportCommand(env func(string) string) *cobra.Command {
	var where place
	var site, station, out string
	cmd := &cobra.Command{
		Use:     "export",
		Short:   "Write a station's readings to a file that import reads back to the same record",
		Example: "  swardbook export --db course.db --station roof --out roof.csv",
		Args:    cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) (err error) {
			house, err := open(cmd.Context(), where.db, where.team)
			if err != nil {
				return err
			}
			defer func() { err = errors.Join(err, house.close()) }()
			setup, err := house.desk.Book.Setup(cmd.Context())
			if err != nil {
				return err
			}
			at, err := setup.Site(site)
			if err != nil {
				return err
			}
			of, err := setup.Station(at, station)
			if err != nil {
				return err
			}
			write := func(to io.Writer) error { return house.desk.Book.Export(cmd.Context(), of.ID, to) }
			if out == "" {
				return write(cmd.OutOrStdout())
			}
			return writeWhole(out, write)
		},
	}
	where.addTo(cmd, env)
	cmd.Flags().StringVar(&site, "site", "", "site; not needed with one")
	cmd.Flags().StringVar(&station, "station", "", "station; not needed with one")
	cmd.Flags().StringVar(&out, "out", "", "file to write; standard output when not given")
	return cmd
}

// writeWhole writes a file under another name first, so that no half of it is
// ever there; one that is there is not written over.
func writeWhole(path string, write func(io.Writer) error) (err error) {
	if _, err := os.Lstat(path); err == nil {
		return planner.Problemf(planner.Taken, "the file %s is there already", path).WithHint("Name another file.")
	}
	draft, err := os.Create(path + ".part")
	if err != nil {
		return planner.Problemf(planner.Refused, "the file %s cannot be written", path).WithCause(err).WithHint("See that the folder is there and may be written to.")
	}
	defer func() {
		if err != nil {
			err = errors.Join(err, os.Remove(draft.Name()))
		}
	}()
	buffered := bufio.NewWriter(draft)
	if err := errors.Join(write(buffered), buffered.Flush(), draft.Close()); err != nil {
		return fmt.Errorf("write the file %s: %w", path, err)
	}
	return os.Rename(draft.Name(), path)
}
