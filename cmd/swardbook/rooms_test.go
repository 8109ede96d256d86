package main

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// The house: which room may import which others of ours. Data flows one way, cmd
// to bot and storage to planner to calc; bot and storage never meet, and
// planner's root knows none of its own subfolders. A room that is not listed may
// not exist: add its row with its folder.
var rooms = map[string][]string{
	"calc":                 {},
	"calc/knownday":        {},
	"planner":              {"calc"},
	"planner/outlook":      {"planner", "calc"},
	"planner/workbook":     {"planner", "calc"},
	"storage":              {"planner", "calc", "storage/sqlite", "storage/intake"},
	"storage/sqlite":       {"planner", "calc"},
	"storage/intake":       {"planner", "calc"},
	"storage/storetest":    {"planner", "calc"},
	"bot/reply":            {"planner", "calc"},
	"bot/reply/plain":      {"bot/reply"},
	"bot/briefing":         {"planner", "calc", "bot/reply"},
	"bot/chart":            {"planner", "calc", "bot/reply"},
	"bot/command":          {"planner", "calc", "bot/reply", "bot/reply/plain", "bot/briefing", "bot/chart", "planner/workbook"},
	"bot/schedule":         {"planner", "calc", "bot/reply", "bot/briefing", "bot/command"},
	"bot/terminal":         {"planner", "calc", "bot/reply", "bot/reply/plain", "bot/command"},
	"bot/discord":          {"planner", "calc", "bot/reply", "bot/reply/plain", "bot/command", "bot/schedule"},
	"bot/discord/fakechat": {},
	"cmd/swardbook":        {everyRoom},
}

// helpRooms help tests: no row above names them but as a test's, and what holds
// for tests holds for them.
var helpRooms = []string{"calc/knownday", "storage/storetest", "bot/discord/fakechat"}

// testRooms are the further rooms that a room's tests may import.
var testRooms = map[string][]string{
	"*":              {"calc/knownday"},
	"planner":        {"planner/outlook"},
	"storage":        {"storage/storetest"},
	"storage/sqlite": {"storage/storetest"},
	"bot/discord":    {"bot/discord/fakechat"},
	"cmd/swardbook":  {"bot/discord/fakechat"},
}

// everyRoom, in a row of rooms, is any of them.
const everyRoom = "*"

// outside says which rooms may import what is not ours, by the start of its
// path. The standard library is open to all but for what is listed; anything else
// that is not listed may not be imported: add its row with the dependency.
var outside = map[string][]string{
	"github.com/bwmarrin/discordgo":       {"bot/discord"},
	"github.com/gorilla/websocket":        {"bot/discord", "bot/discord/fakechat"},
	"github.com/prometheus/client_golang": {"bot/discord", "cmd/swardbook"},
	"github.com/xuri/excelize/v2":         {"planner/workbook"},
	"database/sql":                        {"storage/sqlite"},
	"modernc.org/sqlite":                  {"storage/sqlite"},
	"github.com/pressly/goose/v3":         {"storage/sqlite"},
	"gonum.org/v1/plot":                   {"bot/chart"},
	"gonum.org/v1/gonum":                  {"planner", "planner/outlook"},
	"github.com/robfig/cron/v3":           {"bot/schedule", "cmd/swardbook"},
	"github.com/schollz/progressbar/v3":   {"cmd/swardbook"},
	"github.com/spf13/cobra":              {"cmd/swardbook"},
	"github.com/peterh/liner":             {"bot/terminal"},
	"github.com/mattn/go-runewidth":       {"bot/reply/plain"},
	"golang.org/x/term":                   {"bot/terminal", "cmd/swardbook"},
	"golang.org/x/text":                   {"storage/intake"},
	"golang.org/x/image":                  {"bot/chart"},
	"pgregory.net/rapid":                  {},
	"github.com/google/go-cmp":            {},
	"github.com/rogpeppe/go-internal":     {},
}

// testOutside may be imported by any room's tests.
var testOutside = []string{
	"pgregory.net/rapid", "github.com/google/go-cmp", "github.com/rogpeppe/go-internal", "gonum.org/v1/gonum",
}

// clockRooms are the rooms that may ask what time it is: cmd, and the tick.
var clockRooms = []string{"cmd/swardbook", "bot/schedule"}

const module = "swardbook"

// starts reports whether an import path is the prefix or lies below it.
func starts(path, prefix string) bool { return path == prefix || strings.HasPrefix(path, prefix+"/") }

// refuse says what is wrong with a file's import; "" when nothing is.
func refuse(room string, isTest bool, imported string) string {
	allowed, listed := rooms[room]
	isTest = isTest || slices.Contains(helpRooms, room)
	if !listed {
		return fmt.Sprintf("room %s is not in the table", room)
	}
	if starts(imported, module) {
		other := strings.TrimPrefix(strings.TrimPrefix(imported, module), "/")
		switch {
		case slices.Contains(allowed, other), slices.Contains(allowed, everyRoom) && !slices.Contains(helpRooms, other):
		case isTest && (other == room || slices.Contains(testRooms[room], other) || slices.Contains(testRooms["*"], other)):
		default:
			return fmt.Sprintf("room %s may not import %s", room, other)
		}
		return ""
	}
	for prefix, allowed := range outside {
		if starts(imported, prefix) {
			if slices.Contains(allowed, room) || isTest && slices.Contains(testOutside, prefix) {
				return ""
			}
			return fmt.Sprintf("room %s may not import %s", room, imported)
		}
	}
	if first, _, _ := strings.Cut(imported, "/"); strings.Contains(first, ".") {
		return fmt.Sprintf("%s is not in the table of what is not ours (imported by %s)", imported, room)
	}
	return ""
}

// refuseFile lists all that is wrong with a file of a room: its imports and, in
// a room without a clock, its looks at one.
func refuseFile(room string, isTest bool, file *ast.File) []string {
	var faults []string
	clock := map[string]bool{} // the names under which the file knows package time
	for _, spec := range file.Imports {
		imported, err := strconv.Unquote(spec.Path.Value)
		if err != nil {
			faults = append(faults, err.Error())
			continue
		}
		if fault := refuse(room, isTest, imported); fault != "" {
			faults = append(faults, fault)
		}
		if imported != "time" {
			continue
		}
		name := "time"
		if spec.Name != nil {
			name = spec.Name.Name
		}
		clock[name] = true
		if name == "." {
			faults = append(faults, fmt.Sprintf("room %s imports package time without its name", room))
		}
	}
	if isTest || slices.Contains(helpRooms, room) || slices.Contains(clockRooms, room) {
		return faults
	}
	ast.Inspect(file, func(node ast.Node) bool {
		selector, ok := node.(*ast.SelectorExpr)
		if !ok {
			return true
		}
		of, ok := selector.X.(*ast.Ident)
		if ok && clock[of.Name] && slices.Contains([]string{"Now", "Since", "Until"}, selector.Sel.Name) {
			faults = append(faults, fmt.Sprintf("room %s looks at the clock: time.%s", room, selector.Sel.Name))
		}
		return true
	})
	return faults
}

// Every file of the repository keeps to the tables.
func TestRooms(t *testing.T) {
	root := filepath.Join("..", "..")
	seen := map[string]bool{}
	err := fs.WalkDir(os.DirFS(root), ".", func(name string, entry fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if entry.IsDir() && name != "." && (strings.HasPrefix(entry.Name(), ".") || entry.Name() == "testdata") {
			return fs.SkipDir
		}
		if path.Ext(name) != ".go" {
			return nil
		}
		file, err := parser.ParseFile(token.NewFileSet(), filepath.Join(root, filepath.FromSlash(name)), nil, 0)
		if err != nil {
			return err
		}
		seen[path.Dir(name)] = true
		for _, fault := range refuseFile(path.Dir(name), strings.HasSuffix(name, "_test.go"), file) {
			t.Errorf("%s: %s", name, fault)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, room := range []string{"calc", "planner", "planner/outlook", "storage/sqlite", "bot/command", "cmd/swardbook"} {
		if !seen[room] {
			t.Errorf("no file of room %s was looked at", room)
		}
	}
}

// The checker itself, on made-up files: a wrong arrow must fail.
func TestRoomsRefuses(t *testing.T) {
	const inTests = true
	for _, row := range []struct {
		room   string
		test   bool
		source string
		faults int
	}{
		{"planner", false, `import "swardbook/calc"`, 0},
		{"planner", false, `import ("errors"; "gonum.org/v1/gonum/stat")`, 0},
		{"planner", false, `import "swardbook/planner/outlook"`, 1},
		{"planner", false, `import "swardbook/storage/sqlite"`, 1},
		{"planner", false, `import _ "swardbook/bot/command"`, 1},
		{"planner", false, `import "swardbook"`, 1},
		{"planner", false, `import "swardbookish/calc"`, 0}, // of the standard library, as far as a path tells
		{"calc", false, `import ("fmt"; "math")`, 0},
		{"calc", false, `import "gonum.org/v1/gonum/stat"`, 1},
		{"calc", false, `import "swardbook/planner"`, 1},
		{"calc", false, `import "swardbook/calc/knownday"`, 1},
		{"calc", inTests, `import ("swardbook/calc"; "swardbook/calc/knownday"; "gonum.org/v1/gonum/integrate/quad"; "pgregory.net/rapid")`, 0},
		{"calc/knownday", inTests, `import "swardbook/calc"`, 1},
		{"bot/command", false, `import ("swardbook/planner"; "swardbook/bot/reply"; "swardbook/calc")`, 0},
		{"bot/command", false, `import "swardbook/storage"`, 1},
		{"bot/command", inTests, `import "swardbook/storage/sqlite"`, 1},
		{"bot/command", false, `import "swardbook/bot/discord"`, 1},
		{"bot/command", false, `import "database/sql"`, 1},
		{"bot/reply", false, `import "swardbook/bot/terminal"`, 1},
		{"bot/terminal", false, `import "github.com/bwmarrin/discordgo"`, 1},
		{"bot/discord", false, `import "github.com/bwmarrin/discordgo"`, 0},
		{"storage", false, `import ("swardbook/storage/sqlite"; "swardbook/planner")`, 0},
		{"storage", false, `import "swardbook/bot/reply"`, 1},
		{"storage/sqlite", false, `import ("database/sql/driver"; "modernc.org/sqlite/lib"; "github.com/pressly/goose/v3")`, 0},
		{"storage/sqlite", false, `import "swardbook/storage"`, 1},
		{"storage/sqlite", inTests, `import "swardbook/storage/storetest"`, 0},
		{"storage/sqlite", false, `import "swardbook/storage/storetest"`, 1},
		{"storage/intake", false, `import "modernc.org/sqlite"`, 1},
		{"storage", inTests, `import "database/sql"`, 1},
		{"planner", false, `import "github.com/xuri/excelize/v2"`, 1},
		{"planner/workbook", false, `import ("github.com/xuri/excelize/v2"; "swardbook/planner")`, 0},
		{"planner", false, `import "pgregory.net/rapid"`, 1},
		{"planner", false, `import "example.org/anything"`, 1},
		{"planner", false, `import ("swardbook/bot/reply"; "database/sql")`, 2},
		{"cmd/swardbook", false, `import ("swardbook/bot/terminal"; "swardbook/storage/sqlite"; "github.com/spf13/cobra")`, 0},
		{"cmd/swardbook", false, `import "database/sql"`, 1},
		{"cmd/swardbook", false, `import "swardbook/bot/discord/fakechat"`, 1}, // test help
		{"cmd/swardbook", inTests, `import "swardbook/bot/discord/fakechat"`, 0},
		{"bot/discord", false, `import "swardbook/bot/discord/fakechat"`, 1},
		{"bot/discord", false, `import "swardbook/bot/terminal"`, 1},
		{"bot/discord/fakechat", false, `import ("time"; "github.com/gorilla/websocket"); var at = time.Now()`, 0},
		{"bot/discord/fakechat", false, `import "swardbook/bot/discord"`, 1},
		{"attic", false, `import "fmt"`, 1}, // a room of no row
		{"planner", false, `import "time"; var at = time.Now()`, 1},
		{"planner", false, `import clock "time"; func f() any { return clock.Now }`, 1},
		{"planner", false, `import . "time"; var at = Now()`, 1},
		{"bot/command", false, `import "time"; func f(t time.Time) bool { return time.Since(t) > 0 && time.Until(t) > 0 }`, 2},
		{"planner", false, `import "time"; var at = time.Unix(0, 0)`, 0},
		{"planner", false, `type c struct{}; func (c) Now() int { return 0 }; var time c; var at = time.Now()`, 0},
		{"bot/schedule", false, `import "time"; var at = time.Now()`, 0},
		{"cmd/swardbook", false, `import "time"; var at = time.Now()`, 0},
		{"planner", inTests, `import "time"; var at = time.Now()`, 0},
	} {
		file, err := parser.ParseFile(token.NewFileSet(), "made_up.go", "package made_up\n"+row.source, 0)
		if err != nil {
			t.Fatalf("%s: %v", row.source, err)
		}
		if faults := refuseFile(row.room, row.test, file); len(faults) != row.faults {
			t.Errorf("%s, in tests %t: %s\nfaults %q, want %d", row.room, row.test, row.source, faults, row.faults)
		}
	}
}
