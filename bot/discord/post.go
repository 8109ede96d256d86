package discord

import (
	"context"
	"encoding/json"
	"net/http"
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

// mostPages bounds how far back a channel is read: a thousand messages since
// the post was due.
const mostPages = 10

// Find reads the channel back to the time and looks for our own message with
// the marker.
func (c Channels) Find(ctx context.Context, channel string, marker schedule.Marker, since time.Time) (string, bool, error) {
	before := ""
	for range mostPages {
		page, err := c.bot.rest.ChannelMessages(channel, 100, before, "", "", discordWait(ctx)...)
		if err != nil {
			return "", false, refusal(err)
		}
		for _, message := range page {
			if marked(message, marker.Text) {
				return message.ID, true, nil
			}
		}
		if len(page) < 100 {
			return "", false, nil
		}
		before = page[len(page)-1].ID
		if id, err := strconv.ParseInt(before, 10, 64); err == nil && snowflake(id).Before(since) {
			return "", false, nil
		}
	}
	return "", false, nil
}

// snowflake is the time that an id of the service bears.
func snowflake(id int64) time.Time {
	const epoch = 1420070400000 // ms, from the service's documentation
	return time.UnixMilli(id>>22 + epoch)
}

// marked says whether a button of the message holds the marker. Only
// applications make buttons, and the marker's form is ours; what another
// application's message holds is not looked at.
func marked(message *discordgo.Message, marker string) bool {
	for _, component := range message.Components {
		row, ok := component.(*discordgo.ActionsRow)
		if !ok {
			continue
		}
		for _, cell := range row.Components {
			if button, ok := cell.(*discordgo.Button); ok && strings.HasPrefix(button.CustomID, string(rune(runLine))+pressVersion+":"+marker+":") {
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
