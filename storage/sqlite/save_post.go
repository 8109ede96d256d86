package sqlite

import (
	"context"
	"database/sql"

	sqlite3 "modernc.org/sqlite/lib"

	"swardbook/planner"
)

// posts keeps planner.Post.
type posts struct{}

func (posts) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Post, error) {
	return collect(ctx, on, func(rows *sql.Rows) (post planner.Post, err error) {
		err = rows.Scan(&post.ID, &post.Site, &post.What, &post.Minute, &post.On, &post.Channel,
			&post.WindowMinutes, &post.From, &post.Trouble, &post.Archived)
		return post, err
	}, `SELECT id, site, what, minute, weekdays, channel, window_minutes, from_day, trouble, archived
		FROM post WHERE team = ? AND `+where+` ORDER BY id`, append([]any{team}, args...)...)
}

func (posts) withID(post planner.Post, id int64) planner.Post {
	post.ID = planner.PostID(id)
	return post
}

func (posts) write(ctx context.Context, s saving, before, after planner.Post) error {
	if err := s.staysUnderSite(ctx, before.Site, after.Site); err != nil {
		return err
	}
	return s.put(ctx, after.Kind(), after.Key(), column{"site", after.Site}, column{"what", after.What},
		column{"minute", after.Minute}, column{"weekdays", after.On}, column{"channel", after.Channel},
		column{"window_minutes", after.WindowMinutes}, column{"from_day", after.From},
		column{"trouble", after.Trouble}, column{"archived", after.Archived})
}

// staysUnderSite refuses a site that is not there, and a move to another one.
func (s saving) staysUnderSite(ctx context.Context, was, is planner.SiteID) error {
	if was != 0 && was != is {
		return planner.Problemf(planner.Invalid, "this cannot move to another site").WithHint("Drop it and add one there.")
	}
	return s.parentIsOpen(ctx, planner.Site{}.Kind(), int64(is))
}

// peopleBound keeps planner.People.
type peopleBound struct{}

func (peopleBound) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.People, error) {
	return collect(ctx, on, func(rows *sql.Rows) (people planner.People, err error) {
		err = rows.Scan(&people.ID, &people.Group, &people.Role, &people.Archived)
		return people, err
	}, `SELECT id, outside, role, archived FROM people WHERE team = ? AND `+where+` ORDER BY id`, append([]any{team}, args...)...)
}

func (peopleBound) withID(people planner.People, id int64) planner.People {
	people.ID = planner.PeopleID(id)
	return people
}

func (peopleBound) write(ctx context.Context, s saving, _, after planner.People) error {
	err := s.put(ctx, after.Kind(), after.Key(), column{"outside", after.Group}, column{"role", after.Role}, column{"archived", after.Archived})
	if code(err) == sqlite3.SQLITE_CONSTRAINT_UNIQUE {
		return planner.Problemf(planner.Taken, "that group has a role already").
			WithHint("Change it: /setup people change").WithCause(err)
	}
	return err
}

// channels keeps planner.Channel.
type channels struct{}

func (channels) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Channel, error) {
	return collect(ctx, on, func(rows *sql.Rows) (channel planner.Channel, err error) {
		err = rows.Scan(&channel.ID, &channel.Outside, &channel.Site, &channel.Archived)
		return channel, err
	}, `SELECT id, outside, site, archived FROM channel WHERE team = ? AND `+where+` ORDER BY id`, append([]any{team}, args...)...)
}

func (channels) withID(channel planner.Channel, id int64) planner.Channel {
	channel.ID = planner.ChannelID(id)
	return channel
}

func (channels) write(ctx context.Context, s saving, before, after planner.Channel) error {
	if err := s.staysUnderSite(ctx, before.Site, after.Site); err != nil {
		return err
	}
	err := s.put(ctx, after.Kind(), after.Key(), column{"outside", after.Outside}, column{"site", after.Site}, column{"archived", after.Archived})
	if code(err) == sqlite3.SQLITE_CONSTRAINT_UNIQUE {
		return planner.Problemf(planner.Taken, "that channel is about a site already").
			WithHint("Drop it first: /setup channel drop").WithCause(err)
	}
	return err
}
