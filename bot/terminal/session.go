// Package terminal shows the commands and replies of the chat in a terminal:
// as text for a narrow screen, as JSON for programs, one line at a time or
// from a script.
//
// It must not know what any command does, and computes no figure: it shows
// what stands in a reply.
package terminal

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"slices"
	"strings"
	"syscall"
	"time"

	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/bot/reply/plain"
	"swardbook/planner"
)

// Session runs command lines for one caller and shows what they answer.
type Session struct {
	Table  command.Table
	Caller command.Caller
	// Now tells the time, as Request.Now and Request.LocalClock take it.
	Now func() (now time.Time, localClock bool)
	Out io.Writer // replies
	Err io.Writer // errors, as text
	// Dir is where files and pictures of replies are saved; when it is empty
	// files are saved in the working folder and pictures are not.
	Dir   string
	Width int  // columns of text; 0 is plain.DefaultWidth
	JSON  bool // one JSON object a command, errors too, on Out
	// Confirm asks before a command acts: the reply then ends in the line that
	// says yes. Without it commands act at once, as a script needs.
	Confirm bool
	// Reword, when not nil, puts what is shown into the words of the place it is
	// shown in.
	Reword func(text string) string
	// Progress, when not nil, is told the rows of a long file as they are read.
	Progress func(rows int)
}

// RunLine runs one command and says whether it went well.
func (s *Session) RunLine(ctx context.Context, line string) (ok bool) {
	_, ok = s.Do(ctx, line)
	return ok
}

// Do runs one command, shows what it came to and returns it.
func (s *Session) Do(ctx context.Context, line string) (result Result, ok bool) {
	result = s.run(ctx, line, !s.Confirm)
	return result, s.show(result) == nil && result.Err == nil
}

// run runs one command and saves its files.
func (s *Session) run(ctx context.Context, line string, confirmed bool) Result {
	result := Result{Line: strings.TrimSpace(line), Width: s.Width}
	req := s.request()
	req.Line, req.Confirmed = result.Line, confirmed
	result.Reply, result.Err = s.Table.Run(ctx, req)
	if result.Err == nil {
		result.Reply, result.Files, result.Err = saveFiles(s.Dir, result.Reply)
	}
	return result
}

func (s *Session) request() command.Request {
	now, localClock := s.Now()
	return command.Request{Caller: s.Caller, Now: now, LocalClock: localClock, OpenFile: openFile, Progress: s.Progress}
}

func (s *Session) show(result Result) error {
	if s.JSON {
		return JSON(s.Out, result)
	}
	if _, err := io.WriteString(s.Out, plain.Text(s.reworded(result.Reply), s.Width)); err != nil || result.Err == nil {
		return err
	}
	message, hint := reply.Wrong(result.Err)
	_, err := io.WriteString(s.Err, plain.Text(s.reworded(reply.Of(reply.Text(message+"\n"+hint))), s.Width))
	return err
}

// reworded is the reply with its paragraphs in the words of the place.
func (s *Session) reworded(r reply.Reply) reply.Reply {
	if s.Reword == nil {
		return r
	}
	r.Blocks = slices.Clone(r.Blocks)
	for i, block := range r.Blocks {
		if text, ok := block.(reply.Text); ok {
			r.Blocks[i] = reply.Text(s.Reword(string(text)))
		}
	}
	return r
}

// openFile opens a file by its path, for File options.
func openFile(name string) (io.ReadCloser, error) {
	file, err := os.Open(name)
	if errors.Is(err, fs.ErrNotExist) || errors.Is(err, syscall.ENOTDIR) {
		return nil, planner.Problemf(planner.NotFound, "there is no file %s", name).
			WithHint("Give its path from the folder you are in.").WithCause(err)
	}
	if err != nil {
		return nil, planner.Problemf(planner.Refused, "the file %s cannot be opened", name).
			WithHint("See that you may read it.").WithCause(err)
	}
	if info, err := file.Stat(); err != nil || info.IsDir() {
		return nil, errors.Join(planner.Problemf(planner.Refused, "the path %s is a folder, not a file", name).
			WithHint("Give the path of a file in it."), file.Close())
	}
	return file, nil
}

// maxScriptLine is the longest line of a script that is read, in bytes; the
// table of commands has a limit of its own, with a message of its own.
const maxScriptLine = 1 << 20

// RunScript runs a command a line and gives the number that failed. Blank
// lines and comments (# at the start of a line, or after white space outside
// quotes) are passed over. As text, each command is shown before its output.
func (s *Session) RunScript(ctx context.Context, script io.Reader) (failed int) {
	lines := bufio.NewScanner(script)
	lines.Buffer(nil, maxScriptLine)
	first := true
	for lines.Scan() {
		line := command.WithoutComment(strings.TrimPrefix(lines.Text(), "\ufeff"))
		if line == "" {
			continue
		}
		if ctx.Err() != nil {
			return failed + 1
		}
		if !s.JSON {
			if !first {
				fmt.Fprintln(s.Out)
			}
			fmt.Fprintf(s.Out, "> %s\n", line)
		}
		first = false
		if !s.RunLine(ctx, line) {
			failed++
		}
	}
	if err := lines.Err(); err != nil {
		failed++
		problem := planner.Problemf(planner.Refused, "the script cannot be read any further: %v", err).
			WithHint("Give one command a line.").WithCause(err)
		_ = s.show(Result{Err: problem, Width: s.Width}) // nowhere left to tell
	}
	return failed
}
