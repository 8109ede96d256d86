package terminal

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"

	"swardbook/bot/reply"
	"swardbook/bot/reply/plain"
	"swardbook/planner"
)

// Result is what one command came to.
type Result struct {
	Line  string      // the command line as typed
	Reply reply.Reply // empty when Err is set
	Files []Saved     // where the reply's files went
	Err   error
	Width int // of the text, as in Render
}

// Saved is a file of a reply that was written.
type Saved struct {
	Name string `json:"name"`
	Path string `json:"path"`
}

// JSON writes a result as one JSON object on a line of its own:
//
//	{"command", "ok", "text", "tables", "figures", "files", "error"}
//
// figures is an object from a figure's key to its number at full precision
// (inside units: °C, g/m², days), or to a date as text, in the order of the
// reply. A figure that is no number is left out. tables and files are never
// null; error is, unless the command went wrong.
func JSON(w io.Writer, result Result) error {
	object := struct {
		Command string      `json:"command"`
		OK      bool        `json:"ok"`
		Text    string      `json:"text"`
		Tables  []jsonTable `json:"tables"`
		Figures figures     `json:"figures"`
		Files   []Saved     `json:"files"`
		Error   *jsonError  `json:"error"`
	}{
		Command: result.Line,
		OK:      result.Err == nil,
		Text:    plain.Text(result.Reply, result.Width),
		Tables:  tablesOf(result.Reply),
		Figures: figures(result.Reply.Figures),
		Files:   append([]Saved{}, result.Files...),
		Error:   errorOf(result.Err),
	}
	encoder := json.NewEncoder(w)
	encoder.SetEscapeHTML(false)
	if err := encoder.Encode(object); err != nil {
		return fmt.Errorf("write result: %w", err)
	}
	return nil
}

type jsonTable struct {
	Title   string     `json:"title"`
	Columns []string   `json:"columns"`
	Rows    [][]string `json:"rows"`
}

func tablesOf(r reply.Reply) []jsonTable {
	tables := []jsonTable{}
	for _, block := range r.Blocks {
		table, ok := block.(reply.Table)
		if !ok {
			continue
		}
		out := jsonTable{Title: table.Title, Columns: []string{}, Rows: [][]string{}}
		for _, column := range table.Columns {
			out.Columns = append(out.Columns, column.Name)
		}
		for _, row := range table.Rows {
			out.Rows = append(out.Rows, append([]string{}, row...))
		}
		tables = append(tables, out)
	}
	return tables
}

type jsonError struct {
	Kind    planner.Kind `json:"kind"`
	Message string       `json:"message"`
	Hint    string       `json:"hint"`
}

func errorOf(err error) *jsonError {
	if err == nil {
		return nil
	}
	out := &jsonError{Kind: planner.KindOf(err)}
	out.Message, out.Hint = reply.Wrong(err)
	return out
}

// figures is written as an object that keeps the order of the list.
type figures planner.Figures

// MarshalJSON writes the object. Of two figures with one key the first stands.
func (f figures) MarshalJSON() ([]byte, error) {
	var out bytes.Buffer
	seen := make(map[string]bool, len(f))
	out.WriteByte('{')
	for _, figure := range f {
		value, ok := figureValue(figure)
		if !ok || seen[figure.Key] {
			continue
		}
		if len(seen) > 0 {
			out.WriteByte(',')
		}
		seen[figure.Key] = true
		key, keyErr := json.Marshal(figure.Key)
		text, valueErr := json.Marshal(value)
		if err := errors.Join(keyErr, valueErr); err != nil {
			return nil, fmt.Errorf("figure %s: %w", figure.Key, err)
		}
		out.Write(key)
		out.WriteByte(':')
		out.Write(text)
	}
	out.WriteByte('}')
	return out.Bytes(), nil
}

// figureValue is a number, or the text of a date; not ok for what is neither.
func figureValue(figure planner.Figure) (any, bool) {
	if math.IsNaN(figure.Value) || math.IsInf(figure.Value, 0) {
		return nil, false
	}
	if figure.Unit != planner.Date {
		return figure.Value, true
	}
	if figure.Value < float64(planner.DayMin) || figure.Value > float64(planner.DayMax) {
		return nil, false
	}
	return planner.Day(math.Round(figure.Value)).String(), true
}
