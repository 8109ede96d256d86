package discord

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"strconv"
	"time"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Codes of the service's errors, from its documentation.
const (
	codeUnknownChannel     = 10003
	codeUnknownInteraction = 10062
	codeAlreadyAnswered    = 40060
	codeNoAccess           = 50001
	codeNoPermission       = 50013
)

// body is what is sent: the library's own structs lack some of the fields.
type body struct {
	Content         string                           `json:"content"`
	Embeds          []*discordgo.MessageEmbed        `json:"embeds"`
	Components      []discordgo.MessageComponent     `json:"components"`
	AllowedMentions discordgo.MessageAllowedMentions `json:"allowed_mentions"`
	Attachments     []attachment                     `json:"attachments,omitempty"`
	Flags           discordgo.MessageFlags           `json:"flags,omitempty"`
	Nonce           string                           `json:"nonce,omitempty"`
	EnforceNonce    bool                             `json:"enforce_nonce,omitempty"`
}

// attachment describes a file of the same call.
type attachment struct {
	ID          string `json:"id"`
	Filename    string `json:"filename"`
	Description string `json:"description,omitempty"`
}

// bodyOf makes a message ready to send. Nothing in it can ping anybody.
func (b *Bot) bodyOf(ctx context.Context, m message, lines planner.LineKeeper) (body, []*discordgo.File, error) {
	components, err := rows(ctx, m.buttons, lines, b.Now())
	if err != nil {
		return body{}, nil, err
	}
	out := body{Embeds: m.embeds, Components: components,
		AllowedMentions: discordgo.MessageAllowedMentions{Parse: []discordgo.AllowedMentionType{}}}
	if out.Embeds == nil {
		out.Embeds = []*discordgo.MessageEmbed{}
	}
	var files []*discordgo.File
	for i, file := range m.files {
		out.Attachments = append(out.Attachments, attachment{ID: fmt.Sprint(i), Filename: file.name, Description: file.alt})
		files = append(files, &discordgo.File{Name: file.name, ContentType: file.kind, Reader: bytes.NewReader(file.content)})
	}
	return out, files, nil
}

// call makes one REST call in a bucket of its own: the library keeps one for
// every interaction for good.
func (b *Bot) call(ctx context.Context, client *http.Client, method, endpoint string, data any, files []*discordgo.File) ([]byte, error) {
	kind, raw := "application/json", []byte(nil)
	var err error
	switch {
	case len(files) > 0:
		kind, raw, err = discordgo.MultipartBodyWithJSON(data, files)
	case data != nil:
		raw, err = json.Marshal(data)
	}
	if err != nil {
		return nil, err
	}
	bucket := discordgo.NewRatelimiter().LockBucket("one")
	return b.rest.RequestWithLockedBucket(method, endpoint, kind, raw, bucket, 0, discordgo.WithContext(ctx),
		discordgo.WithClient(client), discordgo.WithRestRetries(0), discordgo.WithRetryOnRatelimit(false))
}

// codeOf is the service's own code of an error, 0 when it has none.
func codeOf(err error) int {
	var rest *discordgo.RESTError
	if errors.As(err, &rest) && rest.Message != nil {
		return rest.Message.Code
	}
	return 0
}

// statusOf is the HTTP status of an error, 0 when there was no answer.
func statusOf(err error) int {
	var rest *discordgo.RESTError
	var limited *discordgo.RateLimitError
	switch {
	case errors.As(err, &rest) && rest.Response != nil:
		return rest.Response.StatusCode
	case errors.As(err, &limited):
		return http.StatusTooManyRequests
	}
	return 0
}

// retryAfter is how long the service wants to be left alone after an error, 0
// when it does not say.
func retryAfter(err error) time.Duration {
	var rest *discordgo.RESTError
	var limited *discordgo.RateLimitError
	switch {
	case errors.As(err, &limited):
		return limited.RetryAfter
	case errors.As(err, &rest) && rest.Response != nil:
		seconds, err := strconv.ParseFloat(rest.Response.Header.Get("Retry-After"), 64)
		if err == nil && seconds > 0 && seconds < time.Hour.Seconds() {
			return time.Duration(seconds * float64(time.Second))
		}
	}
	return 0
}

// answer gives an interaction its first answer. A second try that finds it
// answered means that the first one got through.
func (b *Bot) answer(ctx context.Context, in *discordgo.Interaction, data any) error {
	start := b.Now()
	ctx, cancel := context.WithTimeout(ctx, b.Timing.Answer)
	defer cancel()
	endpoint := discordgo.EndpointInteractionResponse(in.ID, in.Token)
	_, err := b.call(ctx, b.answers, http.MethodPost, endpoint, data, nil)
	if err != nil && (statusOf(err) == 0 || statusOf(err) >= 500) && ctx.Err() == nil {
		_, err = b.call(ctx, b.answers, http.MethodPost, endpoint, data, nil)
		if codeOf(err) == codeAlreadyAnswered {
			err = nil
		}
	}
	if err == nil {
		b.Metrics.answered(b.Now().Sub(start))
	}
	return err
}

// typed is a first answer.
type typed struct {
	Type discordgo.InteractionResponseType `json:"type"`
	Data any                               `json:"data,omitempty"`
}

// deferral promises an answer, for the caller's eyes only or for everybody:
// that cannot be changed later.
func deferral(private bool) typed {
	answer := typed{Type: discordgo.InteractionResponseDeferredChannelMessageWithSource}
	if private {
		answer.Data = map[string]any{"flags": discordgo.MessageFlagsEphemeral}
	}
	return answer
}

// tries is how often an edit is tried: it is the same however often it is made.
const tries = 3

// deliver puts the reply into the deferred answer, and what does not fit into
// messages after it.
func (b *Bot) deliver(ctx context.Context, in *discordgo.Interaction, r reply.Reply, lines planner.LineKeeper, private bool) error {
	messages := render(r, mostMessages)
	if err := b.edit(ctx, in, messages[0], lines); err != nil {
		return err
	}
	for _, m := range messages[1:] {
		if err := b.followUp(ctx, in, m, lines, private); err != nil {
			return err
		}
	}
	return nil
}

// mostMessages is into how many messages a reply is split before it becomes a
// file.
const mostMessages = 4

// edit changes the first answer. When the service says how long it wants to be
// left alone, it is.
func (b *Bot) edit(ctx context.Context, in *discordgo.Interaction, m message, lines planner.LineKeeper) error {
	for try := 0; ; try++ {
		out, files, err := b.bodyOf(ctx, m, lines) // files are read once a try
		if err != nil {
			return err
		}
		_, err = b.call(ctx, b.rest.Client, http.MethodPatch, discordgo.EndpointWebhookMessage(in.AppID, in.Token, "@original"), out, files)
		status := statusOf(err)
		if err == nil || status >= 400 && status < 500 && status != http.StatusTooManyRequests || try+1 == tries {
			return err
		}
		sleep(ctx, max(retryAfter(err), b.Timing.Shortest/10*time.Duration(1+try*try)))
		if ctx.Err() != nil {
			return err
		}
	}
}

// followUp sends another message. It is not tried again: a lost answer would
// make two.
func (b *Bot) followUp(ctx context.Context, in *discordgo.Interaction, m message, lines planner.LineKeeper, private bool) error {
	out, files, err := b.bodyOf(ctx, m, lines)
	if err != nil {
		return err
	}
	if private {
		out.Flags = discordgo.MessageFlagsEphemeral
	}
	_, err = b.call(ctx, b.rest.Client, http.MethodPost, discordgo.EndpointWebhookToken(in.AppID, in.Token)+"?wait=true", out, files)
	return err
}

// fileClient downloads without the token and follows no redirect.
func fileClient(round http.RoundTripper) *http.Client {
	return &http.Client{Transport: round, Timeout: 30 * time.Second,
		CheckRedirect: func(*http.Request, []*http.Request) error { return http.ErrUseLastResponse }}
}

// maxDownload is the largest file taken from a chat: decades of hourly readings.
const maxDownload = 25 << 20

// download fetches a file that was given with a command: only from the
// service's own file hosts, its size checked before and while it is read. What
// it is is told by its content, not by its name.
func (b *Bot) download(ctx context.Context, file *discordgo.MessageAttachment) (io.ReadCloser, error) {
	if err := fromFileHost(file.URL); err != nil {
		return nil, err
	}
	tooLarge := planner.Problemf(planner.Refused, "The file has more than %d MB.", maxDownload>>20).
		WithHint("Cut it into years and send them one by one.")
	if file.Size > maxDownload {
		return nil, tooLarge
	}
	failed := func(cause error) error {
		return planner.Problemf(planner.Refused, "The file could not be fetched from the chat service.").
			WithHint("Send it again.").WithCause(cause)
	}
	request, err := http.NewRequestWithContext(ctx, http.MethodGet, file.URL, nil)
	if err != nil {
		return nil, failed(err)
	}
	resp, err := b.files.Do(request)
	if err != nil {
		return nil, failed(err)
	}
	defer resp.Body.Close()
	if resp.StatusCode != http.StatusOK {
		return nil, failed(fmt.Errorf("status %d", resp.StatusCode))
	}
	content, err := io.ReadAll(io.LimitReader(resp.Body, maxDownload+1))
	if err != nil {
		return nil, failed(err)
	}
	if len(content) > maxDownload {
		return nil, tooLarge
	}
	if kind := http.DetectContentType(content); !readable(kind) {
		return nil, planner.Problemf(planner.Refused, "This is no station file and no sheet, but looks like %s.", kind).
			WithHint("Send text with commas, or the spreadsheet.")
	}
	return io.NopCloser(bytes.NewReader(content)), nil
}
