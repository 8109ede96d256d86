package planner

import "context"

// Ids of what a chat server's own things are bound to.
type (
	// PeopleID names a binding of people for good.
	PeopleID int64
	// ChannelID names a binding of a channel for good.
	ChannelID int64
)

// People says what those may do who are in a group of the chat server (there
// mostly called a role).
type People struct {
	ID       PeopleID `json:"id"`
	Group    string   `json:"group"` // as the chat server names it
	Role     string   `json:"role"`  // CrewRole or LeadRole
	Archived bool     `json:"archived,omitempty"`
}

// Person is somebody who logs and undoes.
type Person struct {
	ID   string // never changes, and no two people share one
	Name string // for people; may change, and two may share one
}

// The words of the two roles.
const (
	CrewRole = "crew"
	LeadRole = "lead"
)

// Kind returns "people".
func (People) Kind() string { return "people" }

// Key returns the binding's id.
func (p People) Key() int64 { return int64(p.ID) }

// Check refuses people without a group or with an unknown role.
func (p People) Check() error {
	if p.Role != CrewRole && p.Role != LeadRole {
		return Problemf(Invalid, "%q is not a role", p.Role).WithHint("Use as:crew or as:lead.")
	}
	return checkOutside("group", p.Group)
}

// Channel binds a channel of the chat server to a site: what is asked in it is
// asked about that site.
type Channel struct {
	ID       ChannelID `json:"id"`
	Outside  string    `json:"outside"` // as the chat server names it
	Site     SiteID    `json:"site"`
	Archived bool      `json:"archived,omitempty"`
}

// Kind returns "channel".
func (Channel) Kind() string { return "channel" }

// Key returns the binding's id.
func (c Channel) Key() int64 { return int64(c.ID) }

// Check refuses a channel without a site.
func (c Channel) Check() error {
	if c.Site == 0 {
		return Problemf(Invalid, "the channel has no site")
	}
	return checkOutside("channel", c.Outside)
}

// RoleOf is the role of somebody who is in the groups, and whether they have
// any: while no group is crew, everybody is.
func (s Setup) RoleOf(groups []string) (role string, known bool) {
	crewBound, crew := false, false
	for _, people := range s.People {
		in := false
		for _, group := range groups {
			in = in || group == people.Group
		}
		if people.Role == LeadRole {
			if in {
				return LeadRole, true
			}
			continue
		}
		crewBound, crew = true, crew || in
	}
	return CrewRole, crew || !crewBound
}

// SiteIn is the site that the channel is bound to.
func (s Setup) SiteIn(channel string) (Site, bool) {
	for _, bound := range s.Channels {
		if bound.Outside != channel {
			continue
		}
		for _, site := range s.Sites {
			if site.ID == bound.Site {
				return site, true
			}
		}
	}
	return Site{}, false
}

// DataKeeper gives a team's data away and takes it out of the store for good.
type DataKeeper interface {
	// Export returns all that is kept of the site as open files.
	Export(ctx context.Context, site SiteID) ([]DataFile, error)
	// EraseSite takes the site and all that belongs to it out of the store,
	// its changes too.
	EraseSite(ctx context.Context, site SiteID) error
	// EraseTeam takes out all that is kept of the team.
	EraseTeam(ctx context.Context) error
}

// DataFile is one file of an export.
type DataFile struct {
	Name    string
	Content []byte
}
