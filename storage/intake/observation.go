package intake

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"time"

	"swardbook/calc"
	"swardbook/planner"
)

// Observations as weather services give them: GeoJSON, a Feature an
// observation, one after the other or in the features of a collection. The
// properties hold timestamp (ISO 8601 with its offset) and temperature, a value
// with unitCode and qualityControl. null is missing.
//
// Lines are counted in features.
type observation struct {
	Type       string `json:"type"`
	Properties struct {
		Station     string `json:"station"`
		Timestamp   string `json:"timestamp"`
		Temperature struct {
			UnitCode       string   `json:"unitCode"`
			Value          *float64 `json:"value"`
			QualityControl string   `json:"qualityControl"`
		} `json:"temperature"`
	} `json:"properties"`
}

const (
	// mostFeature bounds one feature, in bytes; one has some two thousand.
	mostFeature  = 1 << 20
	noTimestamp  = "the observation's timestamp is missing or no time with an offset"
	notAUnit     = "the unit of the temperature is not known"
	failedChecks = "the service's checks failed the value"
	notMeasured  = "the value is a substitute, not a measurement"
)

func recogniseObservations(head []byte) bool {
	return isJSON(head) && bytes.Contains(head, []byte(`"Feature`))
}

// openObservations looks which stations are in the file, and opens it.
func openObservations(src *spool, site Site, how How) (*File, error) {
	file := newObservations(src, site)
	names := map[string]bool{}
	for {
		one, err := file.read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, err
		}
		if len(names) < mostSensors {
			names[one.Properties.Station] = true
		}
	}
	if len(names) == 0 {
		return nil, planner.Problemf(planner.Refused, "the file holds no observation").WithHint("Send the service's answer as it came.")
	}
	wanted, said, err := oneStation(names, how)
	if err != nil {
		return nil, err
	}
	file = newObservations(src, site)
	file.wanted = wanted
	return &File{Format: Readings, Units: planner.Celsius, Sensor: said, rows: file}, nil
}

type observationFile struct {
	site    Site
	bounded *boundedReader
	decoder *json.Decoder
	wanted  string
	inside  bool // the features of a collection
	count   int
}

func newObservations(src *spool, site Site) *observationFile {
	source := src.reader()
	mark := make([]byte, 3)
	if n, _ := src.ReadAt(mark, 0); n == 3 && string(mark) == "\xEF\xBB\xBF" {
		source = io.NewSectionReader(src, 3, src.size-3)
	}
	bounded := &boundedReader{source: source, left: mostFeature}
	return &observationFile{site: site, bounded: bounded, decoder: json.NewDecoder(bounded)}
}

// boundedReader ends with an error when more is read than is left.
type boundedReader struct {
	source io.Reader
	left   int
}

var errLongFeature = errors.New("an observation is longer than 1 MiB")

func (b *boundedReader) Read(p []byte) (int, error) {
	if b.left <= 0 {
		return 0, errLongFeature
	}
	n, err := b.source.Read(p[:min(len(p), b.left)])
	b.left -= n
	return n, err
}

func (*observationFile) clock() string { return ClockOffset }

// read returns the next observation. A collection is entered: what stands in
// front of its features is stepped over.
func (f *observationFile) read() (one observation, err error) {
	f.bounded.left = mostFeature
	if f.inside && !f.decoder.More() {
		return one, f.problem(f.leave())
	}
	if !f.inside {
		entered, err := f.enter(&one)
		if err != nil || !entered {
			f.count++
			return one, f.problem(err)
		}
		return f.read()
	}
	f.count++
	return one, f.problem(f.decoder.Decode(&one))
}

// enter reads the next value of the file: a feature, or a collection as far as
// its features.
func (f *observationFile) enter(one *observation) (entered bool, err error) {
	token, err := f.decoder.Token()
	if err != nil {
		return false, err
	}
	if token == json.Delim('[') {
		f.inside = true
		return true, nil
	}
	if token != json.Delim('{') {
		return false, fmt.Errorf("%v stands where an observation should", token)
	}
	for f.decoder.More() {
		key, err := f.decoder.Token()
		if err != nil {
			return false, err
		}
		var into any = new(json.RawMessage)
		switch key {
		case "features":
			if token, err := f.decoder.Token(); err != nil || token != json.Delim('[') {
				return false, errors.Join(err, errors.New("the features are no list"))
			}
			f.inside = true
			return true, nil
		case "type":
			into = &one.Type
		case "properties":
			into = &one.Properties
		}
		if err := f.decoder.Decode(into); err != nil {
			return false, err
		}
	}
	_, err = f.decoder.Token()
	return false, err
}

// leave ends the file at the end of the features.
func (*observationFile) leave() error { return io.EOF }

func (f *observationFile) problem(err error) error {
	if err == nil || errors.Is(err, io.EOF) && !errors.Is(err, io.ErrUnexpectedEOF) {
		return err
	}
	return planner.Problemf(planner.Refused, "observation %d cannot be read: %s", f.count, cut([]byte(err.Error()))).WithCause(err).
		WithHint("Send the service's answer as it came.")
}

func (f *observationFile) next() (Row, error) {
	for {
		one, err := f.read()
		if err != nil {
			return Row{}, err
		}
		if f.wanted == "" || one.Properties.Station == f.wanted {
			return f.row(one)
		}
	}
}

func (f *observationFile) row(one observation) (Row, error) {
	stamp := one.Properties.Timestamp
	instant, err := time.Parse(time.RFC3339, stamp)
	if err != nil {
		return Row{}, refuse(f.count, []byte(stamp), noTimestamp)
	}
	at := instant.Unix()
	local := at + int64(f.site.OffsetSeconds)
	if !yearsOK(planner.Day(floorDay(at))) || !yearsOK(planner.Day(floorDay(local))) {
		return Row{}, refuse(f.count, []byte(stamp), yearsOff)
	}
	row := Row{Line: f.count, Reading: planner.Reading{At: at}}
	t := one.Properties.Temperature
	if row.Empty = t.Value == nil; row.Empty {
		return row, nil
	}
	shown := []byte(fmt.Sprint(*t.Value))
	switch t.QualityControl {
	case "X", "Q", "B":
		return Row{}, refuse(f.count, shown, failedChecks)
	case "T":
		return Row{}, refuse(f.count, shown, notMeasured)
	}
	switch unit := t.UnitCode[bytes.LastIndexByte([]byte(t.UnitCode), ':')+1:]; unit {
	case "degC":
		row.Reading.C = *t.Value
	case "degF":
		row.Reading.C = calc.CelsiusFromFahrenheit(*t.Value)
	default:
		return Row{}, refuse(f.count, []byte(t.UnitCode), notAUnit)
	}
	if planner.CheckTemperature(row.Reading.C) != nil {
		return Row{}, refuse(f.count, shown, absurdValue)
	}
	return row, nil
}
