package command

import (
	"context"
	"slices"
	"strings"
	"testing"
)

func TestComplete(t *testing.T) {
	tests := []struct {
		role    Role
		partial string
		want    []string
	}{
		{Crew, "", []string{"/due ", "/done ", "/whatif ", "/help "}},
		{Crew, "/", []string{"/due ", "/done ", "/whatif ", "/help "}},
		{Crew, "/d", []string{"/due ", "/done "}},
		{Crew, "DU", []string{"/due "}},
		{Crew, "/set", nil},
		{Crew, "/setup work add ", nil}, // not the crew's
		{Lead, "/set", []string{"/setup "}},
		{Lead, "/setup ", []string{"/setup work "}},
		{Lead, "/setup work ", []string{"/setup work add ", "/setup work list "}},
		{Lead, "/setup work l", []string{"/setup work list "}},
		{Lead, "/setup frob ", nil},
		{Crew, "/due ", []string{"/due surface:", "/due work:", "/due Greens ", `/due "Front nine" `, "/due Tees "}},
		{Crew, "/due s", []string{"/due surface:"}},
		{Crew, "/due gre", []string{"/due Greens "}},
		{Crew, "/due surface:", []string{"/due surface:Greens ", `/due surface:"Front nine" `, "/due surface:Tees "}},
		{Crew, "/due surface:fr", []string{`/due surface:"Front nine" `}},
		{Crew, `/due surface:"front n`, []string{`/due surface:"Front nine" `}},
		{Crew, `/due surface:"front nine" `, []string{`/due surface:"front nine" work:`, `/due surface:"front nine" "feed front nine" `}},
		{Crew, "/due tees work:", []string{`/due tees work:"feed tees" `}},
		{Crew, "/due tees w", []string{"/due tees work:"}},
		{Crew, "/due nonsense:1 ", []string{"/due nonsense:1 surface:", "/due nonsense:1 work:", "/due nonsense:1 Greens ",
			`/due nonsense:1 "Front nine" `, "/due nonsense:1 Tees "}},
		{Crew, "/done greens,te", []string{"/done greens,Tees "}},
		{Crew, "/done surfaces:greens,fr", []string{`/done surfaces:"greens,Front nine" `}},
		{Crew, "/done greens feed when:y", []string{"/done greens feed when:yesterday "}},
		{Crew, "/whatif warm-from:tom", []string{"/whatif warm-from:tomorrow "}},
		{Crew, "/whatif keep:", []string{"/whatif keep:yes ", "/whatif keep:no "}},
		{Crew, "/whatif days:", nil},
		{Lead, "/setup work add counts:de", []string{"/setup work add counts:degree-days "}},
		{Lead, "/setup work list ", nil},
		{Crew, "/due nonsense:", nil},
		{Crew, `/due "a" "b" "c`, nil},
	}
	table := sample(nil)
	for _, test := range tests {
		req := Request{Caller: Caller{Role: test.role}, Now: noon}
		if got := table.Complete(context.Background(), req, test.partial); !slices.Equal(got, test.want) {
			t.Errorf("%s: %q completes to\n %q, want\n %q", test.role, test.partial, got, test.want)
		}
	}
}

func TestSuggest(t *testing.T) {
	many := make([]string, 40)
	for i := range many {
		many[i] = strings.Repeat("x", i+1)
	}
	table := New(nil,
		Command{Path: "many", Options: []Option{{Name: "x", Kind: Name, Complete: func(context.Context, Request, string) []string { return many }}}},
		Command{Path: "crash", Options: []Option{{Name: "x", Kind: Name, Complete: func(context.Context, Request, string) []string { panic("no") }}}},
		Command{Path: "lead", Who: Lead, Options: []Option{{Name: "x", Kind: Yes}}},
	)
	for _, test := range []struct {
		line, option string
		want         int
	}{{"/many", "x", 25}, {"/many", "y", 0}, {"/crash", "x", 0}, {"/lead", "x", 0}, {"/none", "x", 0}} {
		if got := table.Suggest(context.Background(), Request{Line: test.line}, test.option, ""); len(got) != test.want {
			t.Errorf("%s %s: %d suggestions, want %d", test.line, test.option, len(got), test.want)
		}
	}
	got := sample(nil).Suggest(context.Background(), Request{Line: "/due surface:tees"}, "work", "")
	if !slices.Equal(got, []string{"feed tees"}) {
		t.Errorf("the options given so far do not reach Complete: %q", got)
	}
}

func FuzzComplete(f *testing.F) {
	for _, seed := range []string{"/due gre", `/due surface:"fr`, "/done greens,te", "/ ", "\"", "/setup work add counts: d"} {
		f.Add(seed)
	}
	table := sample(nil)
	f.Fuzz(func(t *testing.T, partial string) {
		req := Request{Caller: Caller{Role: Lead}, Now: noon}
		for _, line := range table.Complete(context.Background(), req, partial) {
			if len(line) == 0 || line[0] != '/' && !strings.HasPrefix(partial, line[:1]) {
				t.Fatalf("%q completes to %q", partial, line)
			}
		}
	})
}
