package schedule

import (
	"context"
	"crypto/sha256"
	"encoding/base32"
	"errors"
	"fmt"
	"log/slog"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Content is what a post says.
type Content struct {
	Reply reply.Reply
	// Partial says that yesterday's weather was not whole.
	Partial bool
}

// Writer composes what is posted.
type Writer interface {
	// Compose writes the post of the task.
	Compose(ctx context.Context, task Task, now time.Time) (Content, error)
	// Whole reports whether the weather of the day before is there by now.
	Whole(ctx context.Context, post planner.Post, day planner.Day) (bool, error)
}

// Channels is where posts go. Both methods may take as long as the context
// lets them.
type Channels interface {
	// Send sends the reply into the channel and returns the message's id. The
	// marker stands in the message, for Find; two sends with one nonce within
	// minutes make one message. A *Refused error says that nothing was sent and
	// that another try would not help; after any other error the outcome is
	// unknown.
	Send(ctx context.Context, channel string, marker Marker, r reply.Reply) (message string, err error)
	// Find looks for a message of ours with the marker, back to the instant. It
	// says that there is none only when it has seen all that was said since.
	Find(ctx context.Context, channel string, marker Marker, since time.Time) (message string, found bool, err error)
}

// Marker names one post of one day in the channel. It stands in the message
// and says nothing to anybody else.
type Marker struct {
	Text  string // short, of digits and dots
	Nonce string // at most 25 characters
}

// MarkerOf is the marker of a row's post, day and part in its channel.
func MarkerOf(row planner.Posting) Marker {
	text := fmt.Sprintf("%d.%d.%d", row.Post, row.Day, row.Part)
	sum := sha256.Sum256(fmt.Appendf(nil, "%s|%s", row.Channel, text))
	const nonceLength = 25
	return Marker{Text: text, Nonce: base32.StdEncoding.EncodeToString(sum[:])[:nonceLength]}
}

// Refused says that a post was not sent and why another try would not help.
type Refused struct {
	Reason string // for the lead: "the channel is gone"
	Cause  error
	// Lasting says that the next day's would be refused too.
	Lasting bool
}

// Error is the reason.
func (r *Refused) Error() string { return r.Reason }

// Unwrap is the cause.
func (r *Refused) Unwrap() error { return r.Cause }

// Setup is what the runner needs of what is set up.
type Setup interface {
	Setup(ctx context.Context) (planner.Setup, error)
	Save(ctx context.Context, stamp planner.Stamp, noun planner.Noun) (planner.Noun, error)
}

// Runner sends the posts of one team. Its Tick must not run twice at a time.
//
// A post is sent exactly once by this order: a claimed row in the ledger, the
// message with a nonce and a marker, the row settled. Whoever finds a claimed
// row, after a crash or a lost answer, looks for the marker before it sends
// again: in the channel that stands in the row, wherever the post goes by now.
type Runner struct {
	Setup    Setup
	Ledger   planner.PostLedger
	Writer   Writer
	Channels Channels
	Log      *slog.Logger
	// Count, when not nil, is told of every posting that came to an end.
	Count func(state planner.PostingState)
}

// By is who changes a post that is in trouble.
const By = "Swardbook"

// lookBehind is how many days back the ledger is read, for what to say about
// missed days.
const lookBehind = 31

// Tick does what is due at the time. One post that cannot be sent does not
// keep the others; the errors come back together.
func (r *Runner) Tick(ctx context.Context, now time.Time) error {
	setup, err := r.Setup.Setup(ctx)
	if err != nil || len(setup.Posts) == 0 {
		return err
	}
	posts, err := timed(setup)
	if err != nil {
		return err
	}
	// What is open is settled first, so that what is sent in the same minute can
	// tell what came of it.
	settled, err := r.all(ctx, posts, now, func(do Doing) bool { return do == Settle })
	if err != nil {
		return errors.Join(settled, err)
	}
	fresh, err := r.all(ctx, posts, now, func(do Doing) bool { return do != Settle })
	return errors.Join(settled, fresh, err)
}

// all does the wanted tasks that are due by the ledger as it stands. wrong
// joins the errors of single posts.
func (r *Runner) all(ctx context.Context, posts []Timed, now time.Time, wanted func(Doing) bool) (wrong, err error) {
	ledger, err := r.Ledger.Postings(ctx, planner.DayIn(now, time.UTC)-lookBehind)
	if err != nil {
		return nil, fmt.Errorf("read the ledger: %w", err)
	}
	for _, task := range Due(posts, ledger, now) {
		if !wanted(task.Do) {
			continue
		}
		if ctx.Err() != nil {
			return wrong, ctx.Err()
		}
		task.Posted = lastPosted(ledger, task)
		if err := r.do(ctx, task, now); err != nil {
			wrong = errors.Join(wrong, fmt.Errorf("post %d of %s: %w", task.Post.ID, task.Day, err))
		}
	}
	return wrong, nil
}

// lastPosted is the newest row of the task's post, before its day, that was
// sent with its figures.
func lastPosted(ledger []planner.Posting, task Task) (last planner.Posting) {
	for _, row := range ledger {
		if row.Post == task.Post.ID && row.State == planner.Sent && row.Day < task.Day && row.Day >= last.Day && len(row.Figures) > 0 {
			last = row
		}
	}
	return last
}

func timed(setup planner.Setup) ([]Timed, error) {
	zones := map[planner.SiteID]*time.Location{}
	for _, site := range setup.Sites {
		zone, err := site.Location()
		if err != nil {
			return nil, err
		}
		zones[site.ID] = zone
	}
	var posts []Timed
	for _, post := range setup.Posts {
		if zone, ok := zones[post.Site]; ok {
			posts = append(posts, Timed{post, zone})
		}
	}
	return posts, nil
}

func (r *Runner) do(ctx context.Context, task Task, now time.Time) error {
	row := planner.Posting{Post: task.Post.ID, Day: task.Day, Part: task.Part, State: planner.Claimed, Channel: task.Post.Channel, At: now}
	switch task.Do {
	case Miss:
		row.State, row.Reason = planner.GivenUp, task.Reason
		if claimed, err := r.Ledger.Claim(ctx, row); err != nil || !claimed {
			return err
		}
		r.Log.WarnContext(ctx, "post missed", "post", task.Post.ID, "day", task.Day.String(), "reason", task.Reason)
		r.count(row.State)
		return nil
	case Settle:
		return r.settle(ctx, task, now)
	case Send:
		whole, err := r.Writer.Whole(ctx, task.Post, task.Day)
		if err != nil {
			return err
		}
		row.Partial = !whole // so that a crash does not lose the follow-up
	case FollowUp:
		whole, err := r.Writer.Whole(ctx, task.Post, task.Day)
		if err != nil || !whole {
			return err
		}
	}
	claimed, err := r.Ledger.Claim(ctx, row)
	if err != nil || !claimed {
		return err
	}
	task.Row = row
	return r.send(ctx, task, now)
}

// settle finds out what became of a claimed post: it is in the channel that it
// was claimed for, or it is sent now, or, once its window is over, given up. A
// channel that cannot be looked into is tried for a day past the window; then
// the row ends as one of which nobody knows.
func (r *Runner) settle(ctx context.Context, task Task, now time.Time) error {
	if task.Row.Channel == "" {
		task.Row.Channel = task.Post.Channel
	}
	message, found, err := r.Channels.Find(ctx, task.Row.Channel, MarkerOf(task.Row), lastTry(task).Add(-time.Hour))
	var refused *Refused
	switch {
	case errors.As(err, &refused):
		task.Row.Unsure = true
		moved := task.Row.Channel != task.Post.Channel // then it says nothing about where the next one goes
		return r.giveUp(ctx, task, now, &Refused{Reason: refused.Reason, Cause: err, Lasting: refused.Lasting && !moved})
	case err != nil && task.Hopeless:
		task.Row.Unsure = true
		return r.giveUp(ctx, task, now, &Refused{Reason: "the channel could not be looked through: " + short(err), Cause: err})
	case err != nil:
		return fmt.Errorf("look into the channel: %w", err) // the next tick looks again
	case found:
		row := task.Row // its time is that of the try that got through
		row.State, row.Message, row.Reason = planner.Sent, message, ""
		return r.record(ctx, row)
	case task.Expired:
		reason := "could not be sent by " + task.Due.Add(time.Duration(task.Post.WindowMinutes)*time.Minute).UTC().Format("15:04") + " UTC"
		if task.Row.Reason != "" {
			reason += ": " + task.Row.Reason
		}
		return r.giveUp(ctx, task, now, &Refused{Reason: reason})
	}
	if task.Row.Channel != task.Post.Channel {
		task.Row.Channel = task.Post.Channel
		if err := r.Ledger.Settle(ctx, task.Row); err != nil { // before anything goes there
			return fmt.Errorf("note the other channel: %w", err)
		}
	}
	return r.send(ctx, task, now)
}

// lastTry is when the claimed post may have gone out, or before that: its time
// of day may be a later one by now.
func lastTry(task Task) time.Time {
	if task.Row.At.Before(task.Due) {
		return task.Row.At
	}
	return task.Due
}

// send composes a claimed post and sends it. After an error whose outcome is
// unknown the row stays claimed, with the error as its reason.
func (r *Runner) send(ctx context.Context, task Task, now time.Time) error {
	content, err := r.Writer.Compose(ctx, task, now)
	if err != nil {
		return errors.Join(fmt.Errorf("compose: %w", err), r.noteTrouble(ctx, task, now, err))
	}
	message, err := r.Channels.Send(ctx, task.Row.Channel, MarkerOf(task.Row), content.Reply)
	var refused *Refused
	if errors.As(err, &refused) {
		return r.giveUp(ctx, task, now, refused)
	}
	if err != nil {
		task.Row.Partial = content.Partial
		return errors.Join(fmt.Errorf("send: %w", err), r.noteTrouble(ctx, task, now, err))
	}
	row := task.Row
	row.State, row.At, row.Message, row.Reason, row.Partial = planner.Sent, now, message, "", content.Partial && row.Part == 0
	row.Figures = content.Reply.Figures
	return r.record(ctx, row)
}

func (r *Runner) record(ctx context.Context, row planner.Posting) error {
	// What was sent is recorded also while the program is told to stop.
	if err := r.Ledger.Settle(context.WithoutCancel(ctx), row); err != nil {
		return fmt.Errorf("record: %w", err)
	}
	r.count(row.State)
	return nil
}

// noteTrouble keeps what went wrong in the claimed row, in short.
func (r *Runner) noteTrouble(ctx context.Context, task Task, now time.Time, cause error) error {
	row := task.Row
	row.At, row.Reason = now, short(cause)
	return r.Ledger.Settle(context.WithoutCancel(ctx), row)
}

// short says in a word what kind of trouble an error is; its own text may hold
// addresses.
func short(err error) string {
	var problem *planner.Problem
	switch {
	case errors.As(err, &problem):
		return problem.Message
	case errors.Is(err, context.DeadlineExceeded), errors.Is(err, context.Canceled):
		return "the chat service did not answer in time"
	}
	return "the chat service could not be reached, or answered with an error"
}

// giveUp records that the post is not sent, and puts a post whose channel will
// not take the next one either on hold, so that it is told once.
func (r *Runner) giveUp(ctx context.Context, task Task, now time.Time, refused *Refused) error {
	row := task.Row
	row.State, row.At, row.Reason = planner.GivenUp, now, refused.Reason
	if err := r.record(ctx, row); err != nil {
		return err
	}
	r.Log.ErrorContext(ctx, "post given up", "post", task.Post.ID, "day", task.Day.String(), "reason", refused.Reason, "lasting", refused.Lasting)
	if !refused.Lasting {
		return nil
	}
	post := task.Post
	post.Trouble = refused.Reason
	_, err := r.Setup.Save(ctx, planner.Stamp{At: now, By: By, Command: "hold: " + refused.Reason}, post)
	return err
}

func (r *Runner) count(state planner.PostingState) {
	if r.Count != nil {
		r.Count(state)
	}
}
