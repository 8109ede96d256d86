package command

import (
	"fmt"
	"testing"

	"swardbook/bot/reply"
)

// The table that is served keeps its own rules, and can be explained whole.
func TestTheTableOfCommandsPasses(t *testing.T) {
	table := Desk{}.Table(nil)
	if err := table.Check(); err != nil {
		t.Error(err)
	}
	replies := map[string]reply.Reply{"list for the crew": table.List(Crew), "list for a lead": table.List(Lead)}
	for _, command := range table.All() {
		replies["help of "+command.Path] = Help(command)
		if found, ok := table.Find(command.Path); !ok || found != command {
			t.Errorf("%s is not found under its path", command.Path)
		}
	}
	for name, r := range replies {
		if err := r.Check(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// The crew sees six commands: briefing, due, done, whatif, sheet, help.
func TestTheCrewSeesFewCommands(t *testing.T) {
	six := map[string]bool{"briefing": true, "due": true, "done": true, "whatif": true, "help": true,
		"sheet get": true, "sheet return": true}
	for _, command := range (Desk{}).Table(nil).Visible(Crew) {
		if !six[command.Path] {
			t.Errorf("the crew sees /%s", command.Path)
		}
	}
}

func ExampleTable_List() {
	for _, block := range sample(nil).List(Crew).Blocks {
		for _, field := range block.(reply.Fields) {
			fmt.Println(field.Name, "-", field.Value)
		}
	}
	// Output:
	// /due - days until due
	// /done - log what was done
	// /whatif - as it stands beside what-if
	// /help - how to use it
}

func ExampleTable_ParseLine() {
	call, err := sample(nil).ParseLine(`/done "front nine" feed 3 days ago note:"dry, hand watered"`)
	fmt.Println(call.Line, err)
	_, err = sample(nil).ParseLine("/done greens feed rate:lots")
	fmt.Println(err)
	// Output:
	// /done surfaces:"front nine" works:feed when:"3 days ago" note:"dry, hand watered" <nil>
	// rate cannot be "lots"
}

func ExampleLine() {
	fmt.Println(Line("log undo", Pair{"entry", "7"}))
	fmt.Println(Line("due", Pair{"surface", "front nine"}))
	// Output:
	// /log undo entry:7
	// /due surface:"front nine"
}
