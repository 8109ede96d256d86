package fakechat

import (
	"encoding/json"
	"fmt"
	"strings"
	"time"
)

// User is who acts in the chat.
type User struct {
	ID, Name string
	Groups   []string // the roles they have
	// Permissions are their computed permissions in the channel, in the
	// service's bits; 32 is "manage server".
	Permissions int64
}

// Interaction is one thing a user did, and what came of it. The caller's is
// the caller's own: Wait, WaitAnswer and WaitFollowUp bring it up to date.
type Interaction struct {
	ID, Token string
	Guild     string
	Channel   string
	Kind      int // 2 command, 3 button, 4 completion, 5 form
	At        time.Time
	Answered  time.Duration  // from the doing to the first answer
	Callback  map[string]any // the first answer, nil until there is one
	Message   *Message       // the answer's message, once there is one
	FollowUps []*Message
	edited    bool
}

// Option is an option as a user gives it.
type Option struct {
	Name    string
	Value   any
	Type    int // 3 text, 4 whole number, 5 yes or no, 7 channel, 8 role, 10 number, 11 attachment
	Focused bool
}

// Attachment is a file given with a command; URL says where it is.
type Attachment struct {
	ID, Name, URL, ContentType string
	Size                       int
}

// Do sends what a user does: data is the interaction's own part.
func (f *Fake) do(kind int, guild, channel string, user User, data map[string]any, message *Message) *Interaction {
	f.mu.Lock()
	in := &Interaction{ID: f.newID(), Guild: guild, Channel: channel, Kind: kind}
	in.Token = "token-" + in.ID
	in.At = time.Now()
	f.interactions[in.Token] = in.copied()
	groups := user.Groups
	if groups == nil {
		groups = []string{}
	}
	event := map[string]any{
		"id": in.ID, "application_id": AppID, "type": kind, "token": in.Token, "version": 1, "data": data,
		"guild_id": guild, "channel_id": channel, "app_permissions": f.permissions, "locale": "en-US",
		"member": map[string]any{"user": map[string]any{"id": user.ID, "username": user.Name, "discriminator": "0"},
			"roles": groups, "permissions": fmt.Sprint(user.Permissions), "nick": user.Name},
	}
	if message != nil {
		event["message"] = message.view()
	}
	f.mu.Unlock()
	f.Event("INTERACTION_CREATE", event)
	return in
}

// Command gives a slash command: the path's words become groups.
func (f *Fake) Command(guild, channel string, user User, path string, options ...Option) *Interaction {
	return f.do(2, guild, channel, user, commandData(path, nil, options), nil)
}

// CommandWithFile gives a slash command with a file.
func (f *Fake) CommandWithFile(guild, channel string, user User, path string, file Attachment, options ...Option) *Interaction {
	return f.do(2, guild, channel, user, commandData(path, &file, options), nil)
}

// Complete asks for the values of the focused option.
func (f *Fake) Complete(guild, channel string, user User, path string, options ...Option) *Interaction {
	return f.do(4, guild, channel, user, commandData(path, nil, options), nil)
}

func commandData(path string, file *Attachment, options []Option) map[string]any {
	words := strings.Fields(path)
	inner := []any{}
	for _, option := range options {
		one := map[string]any{"name": option.Name, "type": option.Type, "value": option.Value}
		if option.Focused {
			one["focused"] = true
		}
		inner = append(inner, one)
	}
	for depth := len(words) - 1; depth > 0; depth-- {
		kind := 1
		if depth < len(words)-1 {
			kind = 2
		}
		inner = []any{map[string]any{"name": words[depth], "type": kind, "options": inner}}
	}
	data := map[string]any{"id": "1", "name": words[0], "type": 1, "options": inner}
	if file != nil {
		data["resolved"] = map[string]any{"attachments": map[string]any{file.ID: map[string]any{
			"id": file.ID, "filename": file.Name, "url": file.URL, "proxy_url": file.URL, "size": file.Size, "content_type": file.ContentType}}}
	}
	return data
}

// Click taps a button of a message.
func (f *Fake) Click(guild, channel string, user User, message *Message, customID string) *Interaction {
	return f.do(3, guild, channel, user, map[string]any{"custom_id": customID, "component_type": 2}, message)
}

// Submit sends a form back with values by the inputs' ids.
func (f *Fake) Submit(guild, channel string, user User, customID string, values map[string]string) *Interaction {
	rows := []any{}
	for id, value := range values {
		rows = append(rows, map[string]any{"type": 1, "components": []any{map[string]any{"type": 4, "custom_id": id, "value": value}}})
	}
	return f.do(5, guild, channel, user, map[string]any{"custom_id": customID, "components": rows}, nil)
}

// Replay sends an interaction's event again, as a resumed gateway does.
func (f *Fake) Replay(in *Interaction, user User, path string, options ...Option) {
	f.Event("INTERACTION_CREATE", map[string]any{
		"id": in.ID, "application_id": AppID, "type": in.Kind, "token": in.Token, "version": 1, "data": commandData(path, nil, options),
		"guild_id": in.Guild, "channel_id": in.Channel, "app_permissions": "0",
		"member": map[string]any{"user": map[string]any{"id": user.ID, "username": user.Name, "discriminator": "0"}, "roles": []string{}, "permissions": "0"},
	})
}

// Wait waits until the interaction has its final answer: a completion or a
// form its callback, anything else a message with something in it. It reports
// false when that takes longer.
func (f *Fake) Wait(in *Interaction, patience time.Duration) bool {
	return f.follow(in, patience, func(now *Interaction) bool {
		if now.Callback == nil {
			return false
		}
		switch now.Callback["type"] {
		case float64(8), float64(9), float64(4), float64(7):
			return true
		}
		return now.edited || len(now.FollowUps) > 0
	})
}

// WaitAnswer waits for the first answer, which may be a promise only.
func (f *Fake) WaitAnswer(in *Interaction, patience time.Duration) bool {
	return f.follow(in, patience, func(now *Interaction) bool { return now.Callback != nil })
}

// WaitFollowUp waits for a follow-up message.
func (f *Fake) WaitFollowUp(in *Interaction, patience time.Duration) bool {
	return f.follow(in, patience, func(now *Interaction) bool { return len(now.FollowUps) > 0 })
}

// follow waits until what came of an interaction is as it should be, and
// brings the caller's up to date, also when that takes longer.
func (f *Fake) follow(in *Interaction, patience time.Duration, done func(*Interaction) bool) bool {
	f.mu.Lock()
	defer f.mu.Unlock()
	kept := f.interactions[in.Token]
	if kept == nil {
		return false // forgotten
	}
	reached := f.until(patience, func() bool { return done(kept) })
	*in = *kept.copied()
	return reached
}

// copied is the interaction with nothing shared that changes later.
func (in *Interaction) copied() *Interaction {
	copied := *in
	copied.Callback, _ = deep(in.Callback).(map[string]any)
	copied.Message = in.Message.copied()
	copied.FollowUps = nil
	for _, message := range in.FollowUps {
		copied.FollowUps = append(copied.FollowUps, message.copied())
	}
	return &copied
}

// WaitMessages waits until the channel has at least so many messages.
func (f *Fake) WaitMessages(channel string, n int, patience time.Duration) bool {
	f.mu.Lock()
	defer f.mu.Unlock()
	return f.until(patience, func() bool { return len(f.messages[channel]) >= n })
}

// until waits for the condition. The lock is held, but while it waits.
func (f *Fake) until(patience time.Duration, done func() bool) bool {
	over := false
	timer := time.AfterFunc(patience, func() {
		f.mu.Lock()
		defer f.mu.Unlock()
		over = true
		f.cond.Broadcast()
	})
	defer timer.Stop()
	for !done() {
		if over {
			return false
		}
		f.cond.Wait()
	}
	return true
}

// callback takes the first answer to an interaction. The lock is held.
func (f *Fake) callback(id, token string, c call, arrived time.Time) answer {
	in := f.interactions[token]
	if in == nil || in.ID != id {
		return refuse(404, 10062, "Unknown interaction")
	}
	if in.Callback != nil {
		return refuse(400, 40060, "Interaction has already been acknowledged.")
	}
	in.Answered = arrived.Sub(in.At)
	if in.Answered > f.limit {
		f.problem("interaction answered after %s", in.Answered)
		return refuse(404, 10062, "Unknown interaction")
	}
	in.Callback, _ = deep(c.body).(map[string]any) // the message's own body is edited later
	data, _ := c.body["data"].(map[string]any)
	flags, _ := data["flags"].(float64)
	private := int(flags)&64 != 0
	switch kind := c.body["type"]; {
	case kind == float64(8) && in.Kind == 4:
		choices, ok := data["choices"].([]any)
		if !ok || len(choices) > 25 {
			f.problem("completion: %d choices, or none at all sent (%v)", len(choices), ok)
		}
		for _, choice := range list(data, "choices") {
			if n, v := units(text(choice, "name")), units(text(choice, "value")); n < 1 || n > 100 || v < 1 || v > 100 {
				f.problem("completion: choice of %d and %d characters", n, v)
			}
		}
	case in.Kind == 4:
		f.problem("a completion was answered with type %v", kind)
	case kind == float64(9) && in.Kind != 5:
		f.checkModal(data)
	case kind == float64(4) || kind == float64(7):
		c.body = data
		f.checkMessage("answer", c, in.Guild)
		in.Message = &Message{ID: f.newID(), Channel: in.Channel, Private: private, Body: data, Files: c.files, Names: c.names, At: f.clock()}
		if !private && kind == float64(4) {
			f.messages[in.Channel] = append(f.messages[in.Channel], in.Message)
		}
	case kind == float64(5) || kind == float64(6) && in.Kind == 3:
		for key := range data {
			if key != "flags" && key != "tts" && key != "content" && key != "components" && key != "embeds" && key != "allowed_mentions" {
				f.problem("a deferral with %s", key)
			}
		}
		in.Message = &Message{ID: f.newID(), Channel: in.Channel, Private: private, Body: map[string]any{}, At: f.clock()}
		if !private && kind == float64(5) {
			f.messages[in.Channel] = append(f.messages[in.Channel], in.Message)
		}
	default:
		f.problem("interaction of kind %d answered with type %v", in.Kind, kind)
	}
	return answer{status: 204}
}

// webhook takes edits and follow-ups. The lock is held.
func (f *Fake) webhook(method string, parts []string, c call) answer {
	in := f.interactions[parts[2]]
	if in == nil {
		return refuse(404, 10015, "Unknown Webhook")
	}
	if in.Callback == nil {
		return refuse(404, 10008, "Unknown Message")
	}
	if len(parts) == 5 && parts[4] == "@original" {
		switch method {
		case "PATCH":
			f.checkMessage("edit", c, in.Guild)
			for key, value := range c.body {
				in.Message.Body[key] = value
			}
			in.Message.Files, in.Message.Names = c.files, c.names
			in.Message.Edits++
			in.edited = true
			return answer{200, in.Message.view()}
		case "DELETE":
			in.Message.Deleted = true
			return answer{status: 204}
		case "GET":
			return answer{200, in.Message.view()}
		}
	}
	if method == "POST" && len(parts) == 3 {
		if in.Callback["type"] == float64(5) && !in.edited {
			f.problem("a follow-up right after a deferral: it would edit the first answer")
		}
		f.checkMessage("follow-up", c, in.Guild)
		flags, _ := c.body["flags"].(float64)
		message := &Message{ID: f.newID(), Channel: in.Channel, Private: int(flags)&64 != 0, Body: c.body, Files: c.files, Names: c.names, At: f.clock()}
		in.FollowUps = append(in.FollowUps, message)
		if !message.Private {
			f.messages[in.Channel] = append(f.messages[in.Channel], message)
		}
		return answer{200, message.view()}
	}
	f.problem("unknown call %s %s", method, strings.Join(parts, "/"))
	return refuse(404, 0, "404: Not Found")
}

// Say is all that a message says, as text: content, embeds, labels.
func (m *Message) Say() string {
	var out []string
	out = append(out, text(m.Body, "content"))
	for _, embed := range list(m.Body, "embeds") {
		out = append(out, text(embed, "title"), text(embed, "description"))
		for _, field := range list(embed, "fields") {
			out = append(out, text(field, "name")+": "+text(field, "value"))
		}
		if footer, ok := embed["footer"].(map[string]any); ok {
			out = append(out, text(footer, "text"))
		}
	}
	return strings.TrimSpace(strings.Join(out, "\n"))
}

// Buttons are a message's buttons in order: label and id.
func (m *Message) Buttons() (labels, ids []string) {
	for _, row := range list(m.Body, "components") {
		for _, button := range list(row, "components") {
			labels, ids = append(labels, text(button, "label")), append(ids, text(button, "custom_id"))
		}
	}
	return labels, ids
}

// Button is the id of the button with the label, "" when there is none.
func (m *Message) Button(label string) string {
	labels, ids := m.Buttons()
	for i := range labels {
		if labels[i] == label {
			return ids[i]
		}
	}
	return ""
}

// JSON is the message's body, for a picture of it.
func (m *Message) JSON() string {
	raw, _ := json.MarshalIndent(m.Body, "", "  ")
	return string(raw)
}

// Choices are the values that a completion offered.
func (in *Interaction) Choices() []string {
	data, _ := in.Callback["data"].(map[string]any)
	var values []string
	for _, choice := range list(data, "choices") {
		values = append(values, text(choice, "value"))
	}
	return values
}

// Form is the form that an interaction was answered with: its id and inputs.
func (in *Interaction) Form() (customID string, inputs []string) {
	data, _ := in.Callback["data"].(map[string]any)
	for _, row := range list(data, "components") {
		for _, input := range list(row, "components") {
			inputs = append(inputs, text(input, "custom_id"))
		}
	}
	return text(data, "custom_id"), inputs
}
