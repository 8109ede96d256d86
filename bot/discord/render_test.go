package discord

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/bot/reply"
)

// sample has every block there is.
func sample() reply.Reply {
	r := reply.Of(
		reply.Heading("Quillmere, Tue 4 Jun"),
		reply.Text("greens feed: due\n2 days late_r: see channel:1010101010101010101"),
		reply.Heading("Yesterday"),
		reply.Fields{{Name: "high", Value: "21.4 °C"}, {Name: "note", Value: "dry\nwindy"}},
		reply.Table{Title: "Growth", Columns: []reply.Column{reply.Left("surface"), reply.Right("potential")}, Rows: [][]string{{"greens", "88 %"}, {"te`es", "91 %"}}},
		reply.Picture{Name: "plan.png", Alt: "a line that rises", PNG: []byte("\x89PNG")},
		reply.File{Name: "week.xlsx", Content: []byte("PK")},
		reply.Actions{{Label: "Due", Line: "/due"}, {Label: "Due", Line: "/due"}, {Label: "Done…", Line: "/done"}},
	)
	r.Confirm = &reply.Confirm{Question: "Log this?", Line: "/done greens feed", Code: "ABCD"}
	return r
}

func TestRenderShowsEveryBlock(t *testing.T) {
	messages := render(sample(), mostMessages)
	if len(messages) != 1 {
		t.Fatalf("%d messages", len(messages))
	}
	m := messages[0]
	var all strings.Builder
	for _, embed := range m.embeds {
		all.WriteString(embed.Title + "\n" + embed.Description + "\n")
		if embed.Image != nil {
			all.WriteString(embed.Image.URL + "\n")
		}
	}
	want := "Quillmere, Tue 4 Jun\n" +
		"greens feed: due\n2 days late\\_r: see <#1010101010101010101>\n\n" +
		"**Yesterday**\n" +
		"**high** 21.4 °C\n**note**\ndry\nwindy\n\n" +
		"**Growth**\n" +
		"```\nsurface  potential\ngreens        88 %\nteˋes         91 %\n```\n" +
		"\n\nattachment://plan.png\n" +
		"\n**Log this?**\n"
	if all.String() != want {
		t.Errorf("got\n%s\nwant\n%s", all.String(), want)
	}
	if len(m.files) != 2 || m.files[0].alt != "a line that rises" || m.files[1].name != "week.xlsx" {
		t.Errorf("files %+v", m.files)
	}
	var labels []string
	for _, button := range m.buttons {
		labels = append(labels, button.label)
	}
	if fmt.Sprint(labels) != "[Yes No Due Done…]" {
		t.Errorf("buttons %v", labels)
	}
}

func TestEscape(t *testing.T) {
	for _, row := range [][2]string{
		{"plain text, 05:30", "plain text, 05:30"},
		{"*bold* _under_ ~gone~", `\*bold\* \_under\_ \~gone\~`},
		{"`code` ||hidden|| > quote", "\\`code\\` \\|\\|hidden\\|\\| \\> quote"},
		{"# big\n- one\n+ two\n1. three", `\# big` + "\n\\- one\n\\+ two\n1\\. three"},
		{"[a](https://example.org)", `\[a\]\(https://example.org\)`},
		{"@everyone <@1> <#2> <@&3>", `\@everyone \<\@1\> \<\#2\> \<\@&3\>`},
		{":smile: 12:30:15", `\:smile: 12:30:15`},
		{"-1.5 +2 3.4", "-1.5 +2 3.4"},
		{`back\slash`, `back\\slash`},
		{"channel:1010101010101010101 group:2020202020202020202", "<#1010101010101010101> <@&2020202020202020202>"},
		{"channel:12 mychannel:1010101010101010101", "channel:12 mychannel:1010101010101010101"},
	} {
		if got := escape(row[0]); got != row[1] {
			t.Errorf("%q:\ngot  %s\nwant %s", row[0], got, row[1])
		}
	}
}

// Whatever a reply holds, it is sent inside every limit and nothing is lost.
func TestRenderProperty(t *testing.T) {
	t.Parallel()
	s := newIdleStage(t, small(), nil)
	var n int
	rapid.Check(t, func(t *rapid.T) {
		n++
		words := rapid.StringOfN(rapid.RuneFrom([]rune("abc déf *_`~|\\@#<>:/1.- \n漢🌱")), 0, -1, 4000)
		var r reply.Reply
		var marks []string
		for i := range rapid.IntRange(1, 12).Draw(t, "blocks") {
			mark := fmt.Sprintf("mark%dend", i)
			switch rapid.IntRange(0, 4).Draw(t, "kind") {
			case 0:
				r.Add(reply.Heading(mark))
			case 1:
				text := []rune(words.Draw(t, "text"))
				r.Add(reply.Text(string(text[:min(len(text), 3900)]) + " " + mark))
			case 2:
				table := reply.Table{Columns: []reply.Column{reply.Left("name"), reply.Right("value")}}
				for j := range rapid.IntRange(1, 200).Draw(t, "rows") {
					table.Rows = append(table.Rows, []string{fmt.Sprint("row ", j), rapid.StringMatching(`[a-z0-9 ]{0,20}`).Draw(t, "cell")})
				}
				table.Rows = append(table.Rows, []string{mark, ""})
				r.Add(table)
			case 3:
				r.Add(reply.Fields{{Name: mark, Value: "x" + rapid.StringMatching(`[a-z*_]{0,900}`).Draw(t, "value")}})
			case 4:
				r.Add(reply.Picture{Name: fmt.Sprintf("p%d.png", i), Alt: mark, PNG: []byte("\x89PNG")})
			}
			marks = append(marks, mark)
		}
		for i := range rapid.IntRange(0, 25).Draw(t, "buttons") {
			r.Add(reply.Actions{{Label: fmt.Sprint("b", i), Line: "/hello name:" + strings.Repeat("x", rapid.IntRange(1, 200).Draw(t, "line")) + fmt.Sprint(i)}})
		}
		if len(r.Blocks) > reply.MaxBlocks || r.Check() != nil {
			return
		}
		most := rapid.SampledFrom([]int{1, mostMessages}).Draw(t, "most")
		messages := render(r, most)
		if len(messages) > most {
			t.Fatalf("%d messages", len(messages))
		}
		var all strings.Builder
		for i, m := range messages {
			out, files, err := s.bot.bodyOf(t.Context(), m, s.house.teams[home].Lines)
			if err != nil {
				t.Fatal(err)
			}
			out.Nonce, out.EnforceNonce = fmt.Sprintf("n%d-%d", n, i), true
			if _, err := s.bot.call(t.Context(), s.bot.rest.Client, "POST", "https://discord.com/api/v9/channels/"+homeRoom+"/messages", out, files); err != nil {
				t.Fatal(err)
			}
			for _, embed := range m.embeds {
				all.WriteString(embed.Title + embed.Description)
			}
			for _, file := range m.files {
				all.Write(file.content)
				all.WriteString(file.alt)
			}
		}
		for _, mark := range marks {
			if !strings.Contains(all.String(), mark) {
				t.Fatalf("%s is lost", mark)
			}
		}
		if problems := s.fake.Problems(); len(problems) > 0 {
			t.Fatal(problems)
		}
	})
}

func TestPress(t *testing.T) {
	keeper := &lines{}
	short := press{kind: runLine, extra: "1.19000.0", line: `/due surface:"north greens"`}
	long := press{kind: askOptions, extra: "surfaces,works", line: "/done note:\"" + strings.Repeat("é:", 200) + `"`}
	for _, one := range []press{short, long} {
		id, err := one.encode(t.Context(), keeper, time.Now())
		if err != nil || unitsOf(id) > maxCustomID {
			t.Fatalf("%q: %v", id, err)
		}
		s := &stage{house: &building{teams: map[string]*Team{home: {Lines: keeper}}}}
		bot := &Bot{Config: Config{House: s.house}}
		got, err := decode(t.Context(), bot.linesOf(home), id)
		if err != nil || got != one {
			t.Errorf("got %+v, %v, want %+v", got, err, one)
		}
	}
}

func FuzzDecode(f *testing.F) {
	for _, seed := range []string{"r1::/due", "r1:1.2.0:/due", "a1:x,y:#7", "::", "", "r1", "é1::/due", "\xb51::"} {
		f.Add(seed)
	}
	bot := &Bot{Config: Config{House: &building{teams: map[string]*Team{home: {Lines: &lines{}}}}}}
	f.Fuzz(func(t *testing.T, id string) {
		p, err := decode(t.Context(), bot.linesOf(home), id)
		if err != nil {
			return
		}
		again, err := p.encode(t.Context(), &lines{}, time.Now())
		if err != nil || unitsOf(id) <= maxCustomID && again != id {
			t.Errorf("%q became %q, %v", id, again, err)
		}
	})
}

func FuzzCutUnits(f *testing.F) {
	f.Add("one two\nthree", 5)
	f.Add("🌱🌱🌱", 2)
	f.Add(`a\*b`, 2)
	f.Fuzz(func(t *testing.T, text string, most int) {
		if most < 2 || most > 100 {
			return
		}
		parts := cutUnits(text, most)
		for _, part := range parts {
			if unitsOf(part) > most {
				t.Errorf("a part of %d units", unitsOf(part))
			}
		}
		squeeze := func(s string) string { return strings.NewReplacer(" ", "", "\n", "").Replace(s) }
		if got := squeeze(strings.Join(parts, "")); got != squeeze(text) {
			t.Errorf("got %q of %q", got, text)
		}
	})
}
