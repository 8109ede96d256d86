package command

import (
	"reflect"
	"testing"

	"swardbook/bot/reply"
)

func TestHelpOfOneCommand(t *testing.T) {
	table := sample(nil)
	add, _ := table.Find("setup work add")
	add.Long = "A target does not transfer."
	want := reply.Of(
		reply.Heading("/setup work add surface name counts [base] [target] [season]"),
		reply.Text("a work that comes round again.\nA target does not transfer.\nFor a lead."),
		reply.Fields{
			{Name: "surface", Value: "on which surface (a name; needed)"},
			{Name: "name", Value: "its name (a name; needed)"},
			{Name: "counts", Value: "by what it counts (one of days, degree-days; needed)"},
			{Name: "base", Value: "the base of degree days (a temperature)"},
			{Name: "target", Value: "the total at which it is due (a number)"},
			{Name: "season", Value: "the first day of its season (a month and day)"},
		},
		reply.Text("Like:\n/setup work add surface:greens name:regulator counts:degree-days base:0 target:200"),
	)
	if got := Help(add); !reflect.DeepEqual(got, want) {
		t.Errorf("help is\n%+v, want\n%+v", got, want)
	}
}

func TestHelpFitsEveryReply(t *testing.T) {
	for _, command := range sample(nil).All() {
		if err := Help(command).Check(); err != nil {
			t.Errorf("%s: %v", command.Path, err)
		}
	}
	done, _ := sample(nil).Find("done")
	if got := textOf(Help(done)); got != "log what was done.\nIt says what it will mean and asks before it acts." {
		t.Errorf("help of a command that asks: %q", got)
	}
}

func TestListByRole(t *testing.T) {
	plain := reply.Fields{{Name: "/due", Value: "days until due"}, {Name: "/done", Value: "log what was done"},
		{Name: "/whatif", Value: "as it stands beside what-if"}, {Name: "/help", Value: "how to use it"}}
	if got, want := sample(nil).List(Crew), reply.Of(plain); !reflect.DeepEqual(got, want) {
		t.Errorf("crew: %+v, want %+v", got, want)
	}
	want := reply.Of(
		append(plain, reply.Field{Name: "/crash", Value: "goes wrong"}),
		reply.Heading("/log"), reply.Fields{{Name: "/log undo", Value: "take an entry back"}},
		reply.Heading("/setup"), reply.Fields{{Name: "/setup work add", Value: "a work that comes round again"}, {Name: "/setup work list", Value: "the works"}},
		reply.Heading("/weather"), reply.Fields{{Name: "/weather file", Value: "read a station's file"}},
	)
	if got := sample(nil).List(Lead); !reflect.DeepEqual(got, want) {
		t.Errorf("lead: %+v, want %+v", got, want)
	}
}
