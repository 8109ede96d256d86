package main

import (
	"context"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"swardbook/bot/command"
	"swardbook/bot/terminal"
)

// chatCommand is the bot in a terminal: one-shot, a script, or a conversation.
func chatCommand(env func(string) string) *cobra.Command {
	var where place
	var as, now string
	var session terminal.Session
	cmd := &cobra.Command{
		Use:   "chat [COMMAND…]",
		Short: "Ask and tell in the terminal what the crew does in the chat",
		Long: "Runs the commands given, or one command a line from standard input (# starts a comment), or asks for them at a terminal.\n" +
			"The exit status is 1 if any command failed. /help lists the commands.",
		Example: "  swardbook chat --db course.db /briefing\n  swardbook chat --db course.db --as lead < setup.txt",
		RunE: func(cmd *cobra.Command, args []string) (err error) {
			house, err := open(cmd.Context(), where.db, where.team)
			if err != nil {
				return err
			}
			defer func() {
				if closing := house.close(); err == nil {
					err = closing
				}
			}()
			as, err := role(as)
			if err != nil {
				return err
			}
			if session.Now, err = clock(now); err != nil {
				return err
			}
			session.Table = house.table(cmd.ErrOrStderr())
			session.Caller = caller(as, env)
			session.Out, session.Err = cmd.OutOrStdout(), cmd.ErrOrStderr()
			session.Width = columnsOf(cmd.OutOrStdout())
			return chat(cmd.Context(), &session, args, cmd.InOrStdin())
		},
	}
	where.addTo(cmd, env)
	cmd.Flags().StringVar(&as, "as", command.Crew.String(), "role: crew or lead")
	cmd.Flags().StringVar(&now, "now", "", "the site's local time, like 2013-07-01T05:30; the machine's clock when not given")
	cmd.Flags().StringVar(&session.Dir, "out", "", "folder for files of replies; the working folder when not given")
	cmd.Flags().BoolVar(&session.JSON, "json", false, "print one JSON object a command")
	cmd.Flags().BoolVar(&session.Confirm, "confirm", false, "ask before a command acts, also in a script")
	return cmd
}

// chat runs the commands of the arguments, of a script, or of a conversation.
func chat(ctx context.Context, session *terminal.Session, args []string, in io.Reader) error {
	failed := 0
	switch {
	case len(args) > 0:
		for _, line := range lines(args) {
			if !session.RunLine(ctx, line) {
				failed++
			}
		}
	case isTerminal(in):
		return session.Interactive(ctx)
	default:
		failed = session.RunScript(ctx, in)
	}
	if failed > 0 {
		return errFailed
	}
	return nil
}

// lines puts arguments together to command lines: one that begins with a slash
// and is no path begins a line, the others go on with it.
func lines(args []string) []string {
	var all []string
	for i, arg := range args {
		word, _, whole := strings.Cut(arg, " ")
		rest, slash := strings.CutPrefix(word, "/")
		switch {
		case i == 0 || slash && !strings.ContainsAny(rest, "/."):
			all = append(all, arg)
		case whole: // the shell took quotes off: put them back
			all[len(all)-1] += " " + requoted(arg)
		default:
			all[len(all)-1] += " " + arg
		}
	}
	return all
}

// requoted puts the value of an argument like note:two words in quotes again.
func requoted(arg string) string {
	if strings.Contains(arg, `"`) {
		return arg
	}
	name, value, ok := strings.Cut(arg, ":")
	if !ok || strings.Contains(name, " ") {
		return `"` + arg + `"`
	}
	return name + `:"` + value + `"`
}
