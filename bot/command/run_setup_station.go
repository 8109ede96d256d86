package command

import (
	"context"
	"fmt"

	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) setupStation() []Command {
	which := nameOption("which station", "roof", d.stationOption().Complete)
	rank := Option{Name: "rank", Kind: Whole, Range: Between(1, 99), Help: "the first gives the record, the next stand in for days it lacks", Example: "1"}
	return []Command{
		{Path: "setup station add", Short: "add a station to a site", Who: Lead,
			Options:  []Option{nameOption("what the station is called", "roof", nil), rank, d.siteOption()},
			Examples: []string{"/setup station add name:roof"}, Run: d.runStationAdd},
		{Path: "setup station change", Short: "rename a station or give it another rank", Who: Lead,
			Options:  []Option{which, newNameOption(), rank, d.siteOption()},
			Examples: []string{"/setup station change name:roof new-name:workshop"}, Run: d.runStationChange},
		{Path: "setup station drop", Short: "drop a station; its readings are kept", Who: Lead, Asks: true,
			Options: []Option{which, d.siteOption()}, Examples: []string{"/setup station drop name:roof"}, Run: d.runStationDrop},
		{Path: "setup station list", Short: "the stations, first by rank first", Who: Lead, Options: []Option{d.siteOption()},
			Examples: []string{"/setup station list"}, Run: d.runStationList},
	}
}

func (d Desk) runStationAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.Text("name")
	station := planner.Station{Site: v.site.ID, Name: name, Rank: len(v.setup.StationsOf(v.site.ID)) + 1}
	if rank, given := v.Values.Whole("rank"); given {
		station.Rank = rank
	}
	return d.kept(ctx, v.stamp(), station, reply.Of(reply.Textf("Added %s, rank %d.", name, station.Rank),
		reply.Text("Next:\n/weather file file:station.csv")))
}

// namedStation is a visit and the station that name: names.
func (d Desk) namedStation(ctx context.Context, req Request) (visit, planner.Station, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return visit{}, planner.Station{}, err
	}
	name, _ := v.Values.Text("name")
	station, err := v.setup.Station(v.site, name)
	return v, station, err
}

func (d Desk) runStationChange(ctx context.Context, req Request) (reply.Reply, error) {
	v, station, err := d.namedStation(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	station.Name = renamed(v.Values, station.Name)
	if rank, given := v.Values.Whole("rank"); given {
		station.Rank = rank
	}
	return d.kept(ctx, v.stamp(), station, reply.Of(reply.Textf("Changed: %s, rank %d.", station.Name, station.Rank)))
}

func (d Desk) runStationDrop(ctx context.Context, req Request) (reply.Reply, error) {
	v, station, err := d.namedStation(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	station.Archived = true
	return d.dropping(ctx, req, v.stamp(), station, "station "+station.Name, "")
}

func (d Desk) runStationList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, station := range v.setup.StationsOf(v.site.ID) {
		fields = append(fields, reply.Field{Name: station.Name, Value: fmt.Sprintf("rank %d", station.Rank)})
	}
	return listed(fields, "There is no station yet. /weather file makes one named after the file."), nil
}
