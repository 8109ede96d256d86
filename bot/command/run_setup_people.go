package command

import (
	"context"

	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) setupPeople() []Command {
	group := Option{Name: "group", Kind: ChatGroup, Required: true, Help: "the group of the chat server (there called a role)"}
	as := Option{Name: "as", Kind: Choice, Required: true, Choices: []string{planner.CrewRole, planner.LeadRole}, Help: "crew read, log and undo their own; leads also set up"}
	return []Command{
		{Path: "setup people add", Short: "make a group of the chat server crew or lead", Who: Lead,
			Long:    "Who may manage the server is a lead in any case. While no group is crew, everybody in the server is.",
			Options: []Option{group, as}, Examples: []string{"/setup people add group:2020202020202020202 as:lead"}, Run: d.runPeopleSet},
		{Path: "setup people change", Short: "give a group another role", Who: Lead,
			Options: []Option{group, as}, Examples: []string{"/setup people change group:2020202020202020202 as:crew"}, Run: d.runPeopleSet},
		{Path: "setup people drop", Short: "take a group's role away", Who: Lead, Asks: true,
			Options: []Option{group}, Examples: []string{"/setup people drop group:2020202020202020202"}, Run: d.runPeopleDrop},
		{Path: "setup people list", Short: "who is crew and who is lead", Who: Lead,
			Examples: []string{"/setup people list"}, Run: d.runPeopleList},
	}
}

func (d Desk) people(ctx context.Context, req Request) (planner.Setup, planner.People, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return setup, planner.People{}, err
	}
	group, _ := req.Values.Text("group")
	for _, people := range setup.People {
		if people.Group == group {
			return setup, people, nil
		}
	}
	return setup, planner.People{Group: group}, nil
}

func (d Desk) runPeopleSet(ctx context.Context, req Request) (reply.Reply, error) {
	setup, people, err := d.people(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	people.Role, _ = req.Values.Text("as")
	out := reply.Of(reply.Textf("group:%s is %s.", people.Group, people.Role))
	if crew, _ := setup.RoleOf(nil); people.Role == planner.CrewRole && crew == planner.CrewRole {
		out.Add(reply.Text("From now on only groups that are crew or lead may use the bot, and who may manage the server."))
	}
	if people.Role == planner.LeadRole {
		out.Add(reply.Text("The chat server shows a lead's commands only to who may manage it. To show them to this group, allow it " +
			"in the server's settings, under Integrations."))
	}
	return d.kept(ctx, req.stamp(nil), people, out)
}

func (d Desk) runPeopleDrop(ctx context.Context, req Request) (reply.Reply, error) {
	_, people, err := d.people(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	if people.ID == 0 {
		return reply.Reply{}, planner.Problemf(planner.NotFound, "That group has no role.").WithHint("/setup people list shows who has one.")
	}
	people.Archived = true
	return d.dropping(ctx, req, req.stamp(nil), people, "group:"+people.Group+" as "+people.Role, "")
}

func (d Desk) runPeopleList(ctx context.Context, _ Request) (reply.Reply, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	fields := reply.Fields{{Name: "who may manage the server", Value: planner.LeadRole}}
	crew := false
	for _, people := range setup.People {
		crew = crew || people.Role == planner.CrewRole
		fields = append(fields, reply.Field{Name: people.Role, Value: "group:" + people.Group})
	}
	if !crew {
		fields = append(fields, reply.Field{Name: "everybody else", Value: planner.CrewRole})
	}
	return listed(fields, ""), nil
}

func (d Desk) setupChannel() []Command {
	channel := Option{Name: "channel", Kind: ChatChannel, Help: "which; the channel you are in when not given"}
	return []Command{
		{Path: "setup channel add", Short: "what is asked in a channel is about one site", Who: Lead,
			Options: []Option{channel, d.siteOption()}, Examples: []string{"/setup channel add site:Quillmere"}, Run: d.runChannelAdd},
		{Path: "setup channel drop", Short: "a channel is about no site any more", Who: Lead,
			Options: []Option{channel}, Examples: []string{"/setup channel drop"}, Run: d.runChannelDrop},
		{Path: "setup channel list", Short: "which channel is about which site", Who: Lead,
			Examples: []string{"/setup channel list"}, Run: d.runChannelList},
	}
}

// channel is the channel that channel: names, or the one the command came from.
func (r Request) channel() (string, error) {
	if channel, given := r.Values.Text("channel"); given {
		return channel, nil
	}
	if r.Channel != "" {
		return r.Channel, nil
	}
	return "", r.Missing("channel")
}

func (d Desk) runChannelAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	channel, err := req.channel()
	if err != nil {
		return reply.Reply{}, err
	}
	for _, bound := range v.setup.Channels {
		if bound.Outside == channel && bound.Site == v.site.ID {
			return reply.Of(reply.Textf("channel:%s is about %s already.", channel, v.site.Name)), nil
		}
	}
	return d.kept(ctx, v.stamp(), planner.Channel{Outside: channel, Site: v.site.ID},
		reply.Of(reply.Textf("What is asked in channel:%s is now about %s.", channel, v.site.Name)))
}

func (d Desk) runChannelDrop(ctx context.Context, req Request) (reply.Reply, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	channel, err := req.channel()
	if err != nil {
		return reply.Reply{}, err
	}
	for _, bound := range setup.Channels {
		if bound.Outside == channel {
			bound.Archived = true
			return d.kept(ctx, req.stamp(nil), bound, reply.Of(reply.Textf("channel:%s is about no site any more.", channel)))
		}
	}
	return reply.Reply{}, planner.Problemf(planner.NotFound, "That channel is about no site.").WithHint("/setup channel list shows which are.")
}

func (d Desk) runChannelList(ctx context.Context, _ Request) (reply.Reply, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, bound := range setup.Channels {
		if site, ok := setup.SiteIn(bound.Outside); ok {
			fields = append(fields, reply.Field{Name: site.Name, Value: "channel:" + bound.Outside})
		}
	}
	return listed(fields, "No channel is about one site. Like: /setup channel add site:Quillmere"), nil
}
