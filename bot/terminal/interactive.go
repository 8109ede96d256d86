package terminal

import (
	"context"
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/peterh/liner"

	"swardbook/bot/reply"
)

// prompter reads lines from a person.
type prompter interface {
	Prompt(prompt string) (string, error)
	AppendHistory(line string)
}

// Interactive talks with the person at the terminal until they leave (exit, or
// ctrl-D) or the context ends. Tab completes; the arrow keys bring back earlier
// lines, which are forgotten when it ends. A command that asks is answered by
// y or n (yes, no). An error is one of the terminal, not of a command.
func (s *Session) Interactive(ctx context.Context) error {
	terminal := liner.NewLiner()
	terminal.SetCtrlCAborts(true)
	terminal.SetTabCompletionStyle(liner.TabPrints)
	terminal.SetCompleter(func(line string) []string {
		return s.Table.Complete(ctx, s.request(), line)
	})
	return errors.Join(s.talk(ctx, terminal), terminal.Close())
}

func (s *Session) talk(ctx context.Context, person prompter) error {
	for ctx.Err() == nil {
		line, err := person.Prompt("> ")
		switch {
		case errors.Is(err, io.EOF):
			fmt.Fprintln(s.Out)
			return nil
		case errors.Is(err, liner.ErrPromptAborted): // ctrl-C drops the line
			continue
		case err != nil:
			return fmt.Errorf("read line: %w", err)
		}
		line = strings.TrimSpace(line)
		switch strings.ToLower(strings.TrimPrefix(line, "/")) {
		case "":
			continue
		case "exit", "quit":
			return nil
		}
		person.AppendHistory(line)
		if err := s.answer(ctx, person, line); err != nil {
			return err
		}
	}
	return nil
}

// answer runs a line, and the line that confirms it when the person says yes.
func (s *Session) answer(ctx context.Context, person prompter, line string) error {
	result := s.run(ctx, line, false)
	asked := result.Reply.Confirm
	if asked == nil {
		return s.show(result)
	}
	result.Reply.Confirm = &reply.Confirm{Question: asked.Question} // y is easier than a code
	if err := s.show(result); err != nil {
		return err
	}
	yes, err := s.yes(person)
	if err != nil {
		return err
	}
	if yes {
		return s.show(s.run(ctx, asked.Answer(), false))
	}
	_, err = fmt.Fprintln(s.Out, "Not done.")
	return err
}

// yes asks for y or n. What is neither, such as the rest of a line that was
// pasted in two, is asked again once, and then means no.
func (s *Session) yes(person prompter) (bool, error) {
	for again := false; ; again = true {
		said, err := person.Prompt("y/n ")
		switch {
		case errors.Is(err, io.EOF), errors.Is(err, liner.ErrPromptAborted):
			return false, nil
		case err != nil:
			return false, fmt.Errorf("read answer: %w", err)
		}
		switch strings.ToLower(strings.TrimSpace(said)) {
		case "y", "yes":
			return true, nil
		case "n", "no":
			return false, nil
		}
		if again {
			return false, nil
		}
		if _, err := fmt.Fprintln(s.Out, "That is neither yes nor no. Nothing is done yet: type y or n."); err != nil {
			return false, err
		}
	}
}
