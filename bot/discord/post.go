package discord

import (
	"context"
	"encoding/json"
	"net/http"
	"net/url"
	"strconv"
	"strings"
	"time"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/reply"
	"swardbook/bot/schedule"
	"swardbook/planner"
)

// Channels sends posts and finds them again; it is schedule.Channels.
type Channels struct {
	bot   *Bot
	lines planner.LineKeeper
}

var _ schedule.Channels = Channels{}

// needs names the permissions that a post takes.
func needs() string {
	names := make([]string, len(posting))
	for i, one := range posting {
		names[i] = one.name
	}
	return strings.Join(names, ", ")
}

// refusal turns an answer that another try would not change into a
// *schedule.Refused; any other error is returned as it is: the outcome is
// unknown.
func refusal(err error) error {
	status, code := statusOf(err), codeOf(err)
	switch {
	case code == codeUnknownChannel:
		return &schedule.Refused{Reason: "the channel is gone", Cause: err, Lasting: true}
	case code == codeNoAccess, code == codeNoPermission, status == http.StatusForbidden:
		return &schedule.Refused{Reason: "the bot lacks a permission in the channel: it needs " + needs(), Cause: err, Lasting: true}
	case code != 0 && status == http.StatusBadRequest, status == http.StatusRequestEntityTooLarge:
		return &schedule.Refused{Reason: "the chat service refused the message", Cause: err}
	}
	return err
}

// Send posts one message, without a push at that hour; what does not fit is a
// file of it.
func (c Channels) Send(ctx context.Context, channel string, marker schedule.Marker, r reply.Reply) (string, error) {
	one := render(r, 1)[0]
	if len(one.buttons) == 0 {
		one.buttons = []labelled{{"More", press{kind: runLine, line: "/help"}, discordgo.SecondaryButton}}
	}
	one.buttons[0].press.extra = marker.Text
	out, files, err := c.bot.bodyOf(ctx, one, c.lines)
	if err != nil {
		return "", err
	}
	out.Nonce, out.EnforceNonce = marker.Nonce, true
	out.Flags = discordgo.MessageFlagsSuppressNotifications
	raw, err := c.bot.call(ctx, c.bot.rest.Client, http.MethodPost, discordgo.EndpointChannelMessages(channel), out, files)
	if err != nil {
		return "", refusal(err)
	}
	var sent struct {
		ID string `json:"id"`
	}
	if err := json.Unmarshal(raw, &sent); err != nil {
		return "", err
	}
	return sent.ID, nil
}

const (
	// pageSize is the most messages that the service gives at a time.
	pageSize = 100
	// mostPages bounds how far back a channel is read: a thousand messages since
	// the post was due.
	mostPages = 10
)

// Find reads the channel back to the time and looks for our own message with
// the marker. When more was said since than is read, it is an error: the
// message may be among the rest.
func (c Channels) Find(ctx context.Context, channel string, marker schedule.Marker, since time.Time) (string, bool, error) {
	before := ""
	for range mostPages {
		page, err := c.page(ctx, channel, before)
		if err != nil {
			return "", false, refusal(err)
		}
		for _, message := range page {
			if message.marked(marker.Text) {
				return message.ID, true, nil
			}
		}
		if len(page) < pageSize {
			return "", false, nil
		}
		before = page[len(page)-1].ID
		if id, err := strconv.ParseInt(before, 10, 64); err == nil && snowflake(id).Before(since) {
			return "", false, nil
		}
	}
	return "", false, planner.Problemf(planner.Busy, "too much was said in the channel since then, more than %d messages", mostPages*pageSize)
}

// said is what is looked at of a message in a channel. It is read without
// the library, which refuses a whole page for one part that it does not know.
type said struct {
	ID         string            `json:"id"`
	Components []json.RawMessage `json:"components"`
}

// page reads the newest messages of the channel, or those before one, newest
// first.
func (c Channels) page(ctx context.Context, channel, before string) (messages []said, err error) {
	query := url.Values{"limit": {strconv.Itoa(pageSize)}}
	if before != "" {
		query.Set("before", before)
	}
	endpoint := discordgo.EndpointChannelMessages(channel)
	raw, err := c.bot.rest.RequestWithBucketID(http.MethodGet, endpoint+"?"+query.Encode(), nil, endpoint, discordWait(ctx)...)
	if err == nil {
		err = json.Unmarshal(raw, &messages)
	}
	return messages, err
}

// snowflake is the time that an id of the service bears.
func snowflake(id int64) time.Time {
	const epoch = 1420070400000 // ms, from the service's documentation
	return time.UnixMilli(id>>22 + epoch)
}

// marked says whether a button in a row of the message holds the marker. Only
// applications make buttons, and the marker's form is ours; parts of another
// form are not ours.
func (m said) marked(marker string) bool {
	for _, part := range m.Components {
		var row struct {
			Components []struct {
				CustomID string `json:"custom_id"`
			} `json:"components"`
		}
		if json.Unmarshal(part, &row) != nil {
			continue
		}
		for _, button := range row.Components {
			if strings.HasPrefix(button.CustomID, string(rune(runLine))+pressVersion+":"+marker+":") {
				return true
			}
		}
	}
	return false
}

// discordWait bounds a call of the library by the context and keeps it from
// waiting for a rate limit by itself.
func discordWait(ctx context.Context) []discordgo.RequestOption {
	return []discordgo.RequestOption{discordgo.WithContext(ctx), discordgo.WithRetryOnRatelimit(false), discordgo.WithRestRetries(1)}
}
