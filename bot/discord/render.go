package discord

import (
	"fmt"
	"strings"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/reply"
	"swardbook/bot/reply/plain"
)

// Limits of a message, from the service's documentation, a little under where
// a count is not defined.
const (
	maxDescription = 4000 // of an embed: 4,096
	maxEmbeds      = 10
	maxAllEmbeds   = 5800 // characters over all embeds of a message: 6,000
	maxTitle       = 256
	maxFiles       = 10
	maxFilesBytes  = 20 << 20 // a request: 25 MiB
	maxAlt         = 1024
	maxButtons     = 25
	maxRow         = 5
	maxLabel       = 80
	maxCustomID    = 100
	// tableWidth is what a phone shows of a code block without scrolling.
	tableWidth = 34
	// textWidth is the width of a reply that is handed over as a text file.
	textWidth = 72
	// mostTable is the longest table that stands in a message; a longer one is
	// handed over as a file.
	mostTable = 2400
)

// message is one message to be.
type message struct {
	embeds  []*discordgo.MessageEmbed
	files   []attached
	buttons []labelled
}

// attached is a file of a message.
type attached struct {
	name, alt, kind string
	content         []byte
}

// labelled is a button: what it says and what it does.
type labelled struct {
	label string
	press press
	style discordgo.ButtonStyle
}

// render shows a reply as at most so many messages. What does not fit is
// handed over as a file, and the message says so; nothing is left out. It is
// pure: what a button does is encoded later, because that may need the store.
func render(r reply.Reply, most int) []message {
	p := page{}
	p.blocks(r)
	if len(p.messages) <= most {
		return p.messages
	}
	kept, dropped := p.messages[:most], p.messages[most:]
	end := &kept[most-1]
	whole := plain.Text(withoutFiles(r), textWidth)
	left := []attached{{name: "reply.txt", kind: "text/plain; charset=utf-8", content: []byte(whole)}}
	for _, one := range dropped {
		left = append(left, one.files...)
	}
	size, note := 0, "All of it is in the attached reply.txt."
	for _, file := range end.files {
		size += len(file.content)
	}
	for i, file := range left {
		if size += len(file.content); len(end.files) == maxFiles || size > maxFilesBytes {
			note += fmt.Sprintf(" %d files more did not fit: ask for them with the command.", len(left)-i)
			break
		}
		end.files = append(end.files, file)
	}
	end.embeds = append(fitting(end.embeds), &discordgo.MessageEmbed{Description: note})
	end.buttons = dropped[len(dropped)-1].buttons
	return kept
}

// fitting leaves room for one more short embed.
func fitting(embeds []*discordgo.MessageEmbed) []*discordgo.MessageEmbed {
	if len(embeds) == maxEmbeds {
		return embeds[:maxEmbeds-1]
	}
	return embeds
}

func withoutFiles(r reply.Reply) reply.Reply {
	blocks := r.Blocks
	r.Blocks = nil
	for _, block := range blocks {
		switch block.(type) {
		case reply.File, reply.Picture, reply.Actions:
		default:
			r.Add(block)
		}
	}
	r.Confirm = nil
	return r
}

// page puts parts one under the other, beginning a new embed or message where
// one is full.
type page struct {
	messages []message
	text     strings.Builder // of the embed under way
	title    string
	headed   bool // the last paragraph names the next
	units    int  // of the message so far, without the text under way
	bytes    int  // of the message's files
	tables   int
	buttons  []labelled
}

func (p *page) blocks(r reply.Reply) {
	p.messages = []message{{}}
	for i, block := range r.Blocks {
		switch b := block.(type) {
		case reply.Heading:
			if i == 0 && unitsOf(string(b)) <= maxTitle {
				p.title = plainLine(string(b))
				continue
			}
			p.heading(string(b))
		case reply.Text:
			p.add(escape(string(b)))
		case reply.Fields:
			p.fields(b)
		case reply.Table:
			p.table(b)
		case reply.Picture:
			p.picture(b)
		case reply.File:
			p.file(attached{name: b.Name, kind: "application/octet-stream", content: b.Content})
		case reply.Actions:
			for _, action := range b {
				press := press{kind: runLine, line: action.Line}
				if action.Ask != "" {
					press.kind, press.extra = askOptions, action.Ask
				}
				p.buttons = append(p.buttons, labelled{action.Label, press, discordgo.SecondaryButton})
			}
		}
	}
	if r.Confirm != nil {
		p.add("**" + escape(r.Confirm.Question) + "**")
		if r.Confirm.Code != "" {
			p.buttons = append([]labelled{
				{"Yes", press{kind: confirmLine, line: r.Confirm.Answer()}, discordgo.SuccessButton},
				{"No", press{kind: refuseLine, line: "/no"}, discordgo.SecondaryButton}}, p.buttons...)
		}
	}
	p.finish()
}

// finish closes the last embed and puts the buttons under the last message;
// those for which there is no room are lines to type.
func (p *page) finish() {
	var kept []labelled
	seen := map[press]bool{}
	for _, button := range p.buttons {
		if seen[button.press] {
			continue
		}
		seen[button.press] = true
		if len(kept) == maxButtons {
			p.add(escape(button.label + ": " + button.press.line))
			continue
		}
		kept = append(kept, button)
	}
	p.endEmbed()
	last := &p.messages[len(p.messages)-1]
	if len(last.embeds) == 0 && len(last.files) == 0 {
		last.embeds = []*discordgo.MessageEmbed{{Description: "Done."}}
	}
	last.buttons = kept
}

func (p *page) last() *message { return &p.messages[len(p.messages)-1] }

// add puts a paragraph under what is there.
func (p *page) add(text string) {
	if strings.TrimSpace(text) == "" {
		return
	}
	for _, part := range cutUnits(text, maxDescription) {
		if p.text.Len() > 0 && unitsOf(p.text.String())+unitsOf(part)+2 > maxDescription {
			p.endEmbed()
		}
		if p.text.Len() > 0 {
			gap := "\n\n"
			if p.headed {
				gap = "\n"
			}
			p.text.WriteString(gap)
		}
		p.headed = false
		p.text.WriteString(part)
	}
}

// heading names what follows, close above it.
func (p *page) heading(text string) {
	p.add("**" + escape(plainLine(text)) + "**")
	p.headed = true
}

// endEmbed closes the embed under way, in a new message if this one is full.
func (p *page) endEmbed() {
	if p.text.Len() == 0 && p.title == "" {
		return
	}
	embed := &discordgo.MessageEmbed{Title: p.title, Description: p.text.String()}
	p.title = ""
	p.text.Reset()
	p.put(embed)
}

func (p *page) put(embed *discordgo.MessageEmbed) {
	units := unitsOf(embed.Title) + unitsOf(embed.Description)
	if len(p.last().embeds) >= maxEmbeds-1 || p.units+units > maxAllEmbeds {
		p.next()
	}
	p.last().embeds = append(p.last().embeds, embed)
	p.units += units
}

func (p *page) next() {
	p.messages = append(p.messages, message{})
	p.units, p.bytes = 0, 0
}

// fields stand one under the other, the name before the value.
func (p *page) fields(fields reply.Fields) {
	var lines []string
	for _, field := range fields {
		between := " "
		if strings.Contains(field.Value, "\n") {
			between = "\n"
		}
		lines = append(lines, "**"+escape(plainLine(field.Name))+"**"+between+escape(field.Value))
	}
	p.add(strings.Join(lines, "\n"))
}

// table stands in a code block; one that is too long is handed over as a file.
func (p *page) table(t reply.Table) {
	title := t.Title
	t.Title = ""
	block := "```\n" + code(plain.Text(reply.Of(t), tableWidth)) + "```"
	if title != "" {
		p.heading(title)
	}
	if unitsOf(block) <= mostTable {
		p.add(block)
		return
	}
	p.tables++
	name := "table.txt"
	if p.tables > 1 {
		name = fmt.Sprintf("table-%d.txt", p.tables)
	}
	t.Title = title
	text := plain.Text(reply.Of(t), 4*textWidth)
	p.add(escape(fmt.Sprintf("The table has %d rows: it is in the attached %s.", len(t.Rows), name)))
	p.file(attached{name: name, kind: "text/plain; charset=utf-8", content: []byte(text)})
}

func (p *page) picture(picture reply.Picture) {
	p.endEmbed()
	name := p.file(attached{name: picture.Name, alt: shortened(picture.Alt, maxAlt), kind: "image/png", content: picture.PNG})
	p.put(&discordgo.MessageEmbed{Image: &discordgo.MessageEmbedImage{URL: "attachment://" + name}})
}

// file puts a file into the message, or into a new one if this one is full. It
// returns the name that the file got: two of one message have different ones.
func (p *page) file(file attached) string {
	p.endEmbed()
	if len(p.last().files) >= maxFiles-1 || len(p.last().embeds) >= maxEmbeds-1 || p.bytes+len(file.content) > maxFilesBytes {
		p.next()
	}
	for n, name := 2, file.name; p.has(file.name); n++ {
		file.name = fmt.Sprintf("%d-%s", n, name)
	}
	p.last().files = append(p.last().files, file)
	p.bytes += len(file.content)
	return file.name
}

func (p *page) has(name string) bool {
	for _, file := range p.last().files {
		if file.name == name {
			return true
		}
	}
	return false
}

// shortened cuts what only describes something that is itself there.
func shortened(text string, most int) string {
	if unitsOf(text) <= most {
		return text
	}
	return cutUnits(text, most-1)[0] + "…"
}
