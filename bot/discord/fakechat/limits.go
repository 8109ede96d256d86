package fakechat

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"mime"
	"mime/multipart"
	"net/http"
	"regexp"
	"strings"
	"unicode/utf16"
)

// call is a REST call's body.
type call struct {
	body  map[string]any
	list  []json.RawMessage // of a body that is a list
	files map[string][]byte
	names []string
	size  int
}

// readCall reads JSON, or a form whose first part is the JSON.
func readCall(r *http.Request) (call, error) {
	var c call
	kind, params, _ := mime.ParseMediaType(r.Header.Get("Content-Type"))
	if kind == "multipart/form-data" {
		return readForm(r.Body, params["boundary"])
	}
	raw, err := io.ReadAll(io.LimitReader(r.Body, 32<<20))
	if err != nil || len(raw) == 0 {
		return c, err
	}
	c.size = len(raw)
	if raw[0] == '[' {
		return c, json.Unmarshal(raw, &c.list)
	}
	return c, json.Unmarshal(raw, &c.body)
}

func readForm(body io.Reader, boundary string) (call, error) {
	c := call{files: map[string][]byte{}}
	form := multipart.NewReader(body, boundary)
	for n := 0; ; n++ {
		part, err := form.NextPart()
		if errors.Is(err, io.EOF) {
			return c, nil
		}
		if err != nil {
			return c, err
		}
		raw, err := io.ReadAll(part)
		if err != nil {
			return c, err
		}
		c.size += len(raw)
		if n == 0 {
			if part.FormName() != "payload_json" {
				return c, fmt.Errorf("the first part is %q", part.FormName())
			}
			if err := json.Unmarshal(raw, &c.body); err != nil {
				return c, err
			}
			continue
		}
		if want := fmt.Sprintf("files[%d]", n-1); part.FormName() != want {
			return c, fmt.Errorf("part %q, want %q", part.FormName(), want)
		}
		c.files[part.FileName()] = raw
		c.names = append(c.names, part.FileName())
	}
}

// units counts as the service may: in UTF-16 units, the stricter way.
func units(text string) int { return len(utf16.Encode([]rune(text))) }

func text(body map[string]any, key string) string {
	value, _ := body[key].(string)
	return value
}

func list(body map[string]any, key string) []map[string]any {
	values, _ := body[key].([]any)
	var out []map[string]any
	for _, value := range values {
		one, _ := value.(map[string]any)
		out = append(out, one)
	}
	return out
}

var (
	mention  = regexp.MustCompile(`<(?:@[!&]?|#)(\d+)>`)
	fileName = regexp.MustCompile(`^[A-Za-z0-9][A-Za-z0-9.-]*$`)
)

// checkMessage holds a message to the documented limits. The lock is held.
func (f *Fake) checkMessage(what string, c call, guild string) {
	body := c.body
	bound := func(part, value string, least, most int) {
		if n := units(value); n < least || n > most {
			f.problem("%s: %s has %d characters, not %d to %d", what, part, n, least, most)
		}
	}
	bound("content", text(body, "content"), 0, 2000)
	mentions, ok := body["allowed_mentions"].(map[string]any)
	if parse, isList := mentions["parse"].([]any); !ok || !isList || len(parse) > 0 {
		f.problem("%s: allowed_mentions is %v: something could ping", what, body["allowed_mentions"])
	}
	if strings.Contains(text(body, "content"), "@everyone") || strings.Contains(text(body, "content"), "@here") {
		f.problem("%s: content holds a mention of everybody", what)
	}
	whole, _ := json.Marshal(body)
	for _, found := range mention.FindAllSubmatch(whole, -1) {
		if at, known := f.channels[string(found[1])]; known && at != guild {
			f.problem("%s: names channel %s of another server", what, found[1])
		}
	}
	for id := range f.guilds {
		if id != guild && strings.Contains(string(whole), id) {
			f.problem("%s: holds the id of another server", what)
		}
	}
	f.checkEmbeds(what, list(body, "embeds"), c)
	f.checkRows(what, list(body, "components"))
	if len(c.names) > 10 || c.size > 25<<20 {
		f.problem("%s: %d files of %d bytes", what, len(c.names), c.size)
	}
	for _, name := range c.names {
		if !fileName.MatchString(name) {
			f.problem("%s: the file name %q would be changed", what, name)
		}
		if len(c.files[name]) > 10<<20 {
			f.problem("%s: the file %s has %d bytes", what, name, len(c.files[name]))
		}
	}
	for _, meta := range list(body, "attachments") {
		bound("alt text", text(meta, "description"), 0, 1024)
	}
	if text(body, "content") == "" && len(list(body, "embeds")) == 0 && len(c.names) == 0 && len(list(body, "components")) == 0 {
		f.problem("%s: empty", what)
	}
}

func (f *Fake) checkEmbeds(what string, embeds []map[string]any, c call) {
	if len(embeds) > 10 {
		f.problem("%s: %d embeds", what, len(embeds))
	}
	sum := 0
	for _, embed := range embeds {
		footer, _ := embed["footer"].(map[string]any)
		for _, part := range []struct {
			name, value string
			most        int
		}{{"title", text(embed, "title"), 256}, {"description", text(embed, "description"), 4096}, {"footer", text(footer, "text"), 2048}} {
			n := units(part.value)
			sum += n
			if n > part.most {
				f.problem("%s: embed %s has %d characters, at most %d", what, part.name, n, part.most)
			}
		}
		fields := list(embed, "fields")
		if len(fields) > 25 {
			f.problem("%s: %d fields", what, len(fields))
		}
		for _, field := range fields {
			name, value := units(text(field, "name")), units(text(field, "value"))
			sum += name + value
			if name < 1 || name > 256 || value < 1 || value > 1024 {
				f.problem("%s: a field of %d and %d characters", what, name, value)
			}
		}
		if image, ok := embed["image"].(map[string]any); ok {
			name := strings.TrimPrefix(text(image, "url"), "attachment://")
			if _, there := c.files[name]; !there {
				f.problem("%s: the picture %q is not among the files %v", what, name, c.names)
			}
		}
		if strings.Count(text(embed, "description"), "```")%2 != 0 {
			f.problem("%s: a code block is not closed", what)
		}
		for i, part := range strings.Split(text(embed, "description"), "```") {
			if i%2 == 0 {
				continue
			}
			for _, line := range strings.Split(part, "\n") {
				if n := units(line); n > 34 {
					f.problem("%s: a table line of %d columns: %s", what, n, line)
				}
			}
		}
	}
	if sum > 6000 {
		f.problem("%s: embeds of %d characters together", what, sum)
	}
}

func (f *Fake) checkRows(what string, rows []map[string]any) {
	if len(rows) > 5 {
		f.problem("%s: %d rows of buttons", what, len(rows))
	}
	ids := map[string]bool{}
	for _, row := range rows {
		parts := list(row, "components")
		if len(parts) < 1 || len(parts) > 5 {
			f.problem("%s: %d buttons in a row", what, len(parts))
		}
		for _, part := range parts {
			id := text(part, "custom_id")
			if n := units(id); n < 1 || n > 100 || ids[id] {
				f.problem("%s: custom_id %q has %d characters, or is there twice", what, id, n)
			}
			ids[id] = true
			if n := units(text(part, "label")); n < 1 || n > 80 {
				f.problem("%s: a label of %d characters", what, n)
			}
		}
	}
}

// checkModal holds a form to the documented limits.
func (f *Fake) checkModal(body map[string]any) {
	if n := units(text(body, "custom_id")); n < 1 || n > 100 {
		f.problem("form: custom_id of %d characters", n)
	}
	if n := units(text(body, "title")); n < 1 || n > 45 {
		f.problem("form: title of %d characters", n)
	}
	rows := list(body, "components")
	if len(rows) < 1 || len(rows) > 5 {
		f.problem("form: %d inputs", len(rows))
	}
	for _, row := range rows {
		inputs := list(row, "components")
		if len(inputs) != 1 || inputs[0]["type"] != float64(4) {
			f.problem("form: a row without one text input")
			continue
		}
		if n := units(text(inputs[0], "label")); n < 1 || n > 45 {
			f.problem("form: label of %d characters", n)
		}
		if n := units(text(inputs[0], "placeholder")); n > 100 {
			f.problem("form: placeholder of %d characters", n)
		}
		if n := units(text(inputs[0], "value")); n > 4000 {
			f.problem("form: value of %d characters", n)
		}
	}
}

var commandName = regexp.MustCompile(`^[-_'\p{Ll}\p{N}]{1,32}$`)

// overwrite registers commands, held to the documented limits.
func (f *Fake) overwrite(c call) answer {
	if c.list == nil {
		f.problem("commands: no list (null would clear nothing)")
	}
	if len(c.list) > 100 {
		f.problem("commands: %d", len(c.list))
	}
	seen := map[string]bool{}
	for _, raw := range c.list {
		var command map[string]any
		if err := json.Unmarshal(raw, &command); err != nil {
			f.problem("commands: %v", err)
			continue
		}
		name := text(command, "name")
		if seen[name] {
			f.problem("command %s: twice", name)
		}
		seen[name] = true
		if sum := f.checkCommand(name, command, 0); sum > 8000 {
			f.problem("command %s: %d characters", name, sum)
		}
	}
	f.commands = c.list
	f.overwrites++
	return answer{200, c.list}
}

// checkCommand checks a command or an option and what is under it, and counts
// its characters.
func (f *Fake) checkCommand(path string, command map[string]any, depth int) int {
	name, description := text(command, "name"), text(command, "description")
	sum := units(name) + units(description)
	if !commandName.MatchString(name) || units(description) < 1 || units(description) > 100 {
		f.problem("command %s: name %q or description %q", path, name, description)
	}
	options := list(command, "options")
	if len(options) > 25 || depth > 3 {
		f.problem("command %s: %d options at depth %d", path, len(options), depth)
	}
	optional := false
	seen := map[string]bool{}
	for _, option := range options {
		if seen[text(option, "name")] {
			f.problem("command %s: option %s twice", path, text(option, "name"))
		}
		seen[text(option, "name")] = true
		required, _ := option["required"].(bool)
		if required && optional {
			f.problem("command %s: required option %s after optional", path, text(option, "name"))
		}
		optional = optional || !required && option["type"].(float64) > 2
		sum += f.checkCommand(path+" "+text(option, "name"), option, depth+1)
	}
	choices := list(command, "choices")
	if complete, _ := command["autocomplete"].(bool); len(choices) > 25 || complete && len(choices) > 0 {
		f.problem("command %s: %d choices, completion %v", path, len(choices), complete)
	}
	for _, choice := range choices {
		sum += units(text(choice, "name")) + units(fmt.Sprint(choice["value"]))
		if n := units(text(choice, "name")); n < 1 || n > 100 {
			f.problem("command %s: choice of %d characters", path, n)
		}
	}
	return sum
}
