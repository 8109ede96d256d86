package discord

import (
	"context"
	"errors"
	"io"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/planner"
)

// interaction takes in whatever a user did. Commands, taps and forms are
// answered within the service's three seconds, before anything is looked up.
func (b *Bot) interaction(ctx context.Context, in *discordgo.Interaction) {
	if in == nil || in.ID == "" || !b.seen.first(in.ID, b.Now()) {
		return // a component this library does not know, or told twice
	}
	kind := in.Type.String()
	sorry := func(ctx context.Context) {
		b.Metrics.interaction(kind, "panic")
		b.apologise(ctx, in)
	}
	b.guard(ctx, kind, func(ctx context.Context) {
		err := b.take(ctx, in)
		outcome := "ok"
		switch {
		case codeOf(err) == codeUnknownInteraction: // replayed, or answered too late: the user has gone on
			outcome = "late"
		case err != nil:
			outcome = "error"
			b.Log.ErrorContext(ctx, "an interaction went wrong", "kind", kind, "server", in.GuildID, "error", err)
		}
		b.Metrics.interaction(kind, outcome)
	}, sorry)
}

func (b *Bot) take(ctx context.Context, in *discordgo.Interaction) error {
	if in.GuildID == "" || in.Member == nil || in.Member.User == nil {
		if in.Type == discordgo.InteractionApplicationCommandAutocomplete {
			return b.answerChoices(ctx, in, nil)
		}
		return b.answerNow(ctx, in, "Ask me in your server, where your team is.")
	}
	switch data := in.Data.(type) {
	case discordgo.ApplicationCommandInteractionData:
		asked := readAsked(data)
		if in.Type == discordgo.InteractionApplicationCommandAutocomplete {
			return b.complete(ctx, in, asked)
		}
		return b.run(ctx, in, job{line: asked.line(), asked: asked})
	case discordgo.MessageComponentInteractionData:
		return b.pressed(ctx, in, data.CustomID)
	case discordgo.ModalSubmitInteractionData:
		return b.submitted(ctx, in, data)
	}
	return b.answerNow(ctx, in, "I do not know how to do that.")
}

// answerNow answers with a word, for the user alone.
func (b *Bot) answerNow(ctx context.Context, in *discordgo.Interaction, text string) error {
	return b.answer(ctx, in, typed{Type: discordgo.InteractionResponseChannelMessageWithSource, Data: body{
		Embeds: []*discordgo.MessageEmbed{{Description: escape(text)}}, Components: []discordgo.MessageComponent{}, Flags: discordgo.MessageFlagsEphemeral,
		AllowedMentions: discordgo.MessageAllowedMentions{Parse: []discordgo.AllowedMentionType{}}}})
}

// apologise tells that it is our fault, whether or not there was an answer.
func (b *Bot) apologise(ctx context.Context, in *discordgo.Interaction) {
	if in.Type == discordgo.InteractionApplicationCommandAutocomplete {
		_ = b.answerChoices(ctx, in, nil)
		return
	}
	message, hint := reply.Wrong(errors.New("panic"))
	if err := b.answerNow(ctx, in, message+" "+hint); codeOf(err) == codeAlreadyAnswered {
		r := reply.Of(reply.Text(message), reply.Text(hint))
		if err := b.edit(ctx, in, render(r, 1)[0], nil); err != nil {
			b.Log.ErrorContext(ctx, "apologise", "error", err)
		}
	}
}

// asked is a command as the service tells it.
type asked struct {
	path    string
	options []*discordgo.ApplicationCommandInteractionDataOption
	files   map[string]*discordgo.MessageAttachment
}

func readAsked(data discordgo.ApplicationCommandInteractionData) asked {
	a := asked{path: data.Name, options: data.Options}
	for len(a.options) == 1 && (a.options[0].Type == discordgo.ApplicationCommandOptionSubCommand || a.options[0].Type == discordgo.ApplicationCommandOptionSubCommandGroup) {
		a.path += " " + a.options[0].Name
		a.options = a.options[0].Options
	}
	if data.Resolved != nil {
		a.files = data.Resolved.Attachments
	}
	return a
}

// line is the command line that means the same. What is being typed right now
// is left out.
func (a asked) line() string {
	var pairs []command.Pair
	for _, option := range a.options {
		if text := a.value(option); text != "" && !option.Focused {
			pairs = append(pairs, command.Pair{Name: option.Name, Value: text})
		}
	}
	return command.Line(a.path, pairs...)
}

// value is an option's value as it would be typed; the service's types are not
// taken on trust.
func (a asked) value(option *discordgo.ApplicationCommandInteractionDataOption) string {
	switch value := option.Value.(type) {
	case string:
		if option.Type == discordgo.ApplicationCommandOptionAttachment {
			if file := a.files[value]; file != nil {
				return fileLabel(file.Filename)
			}
			return ""
		}
		return value
	case bool:
		if value {
			return "yes"
		}
		return "no"
	case float64:
		return strconv.FormatFloat(value, 'f', -1, 64)
	}
	return ""
}

// attachmentNamed is the file that was given under the label.
func (a asked) attachmentNamed(label string) *discordgo.MessageAttachment {
	for _, option := range a.options {
		if id, ok := option.Value.(string); ok && option.Type == discordgo.ApplicationCommandOptionAttachment {
			if file := a.files[id]; file != nil && fileLabel(file.Filename) == label {
				return file
			}
		}
	}
	return nil
}

// job is a command line to run for an interaction.
type job struct {
	line  string
	asked asked
	// yes says that the line came from the Yes under a question: the question is
	// replaced by what came of it.
	yes bool
}

// run answers an interaction with what the line gives.
func (b *Bot) run(ctx context.Context, in *discordgo.Interaction, job job) error {
	call, _ := b.Table.ParseLine(job.line)
	shared := call.Command != nil && call.Command.Shared
	private := !shared || call.Command.Asks
	first := deferral(private)
	if job.yes {
		first = typed{Type: discordgo.InteractionResponseDeferredMessageUpdate}
	}
	if err := b.answer(ctx, in, first); err != nil {
		return err
	}
	r, team, err := b.inTurn(ctx, in, job)
	if err != nil {
		r = wrong(err)
	}
	// What came of it is told also when the time to work is over: an answer was
	// promised.
	ctx, cancel := context.WithTimeout(context.WithoutCancel(ctx), b.Timing.Work)
	defer cancel()
	var lines planner.LineKeeper
	if team != nil {
		lines = team.Lines
	}
	if job.yes && shared && err == nil && !r.Private {
		if err := b.edit(ctx, in, render(reply.Of(reply.Text("Done.")), 1)[0], lines); err != nil {
			return err
		}
		for _, m := range render(r, mostMessages) {
			if err := b.followUp(ctx, in, m, lines, false); err != nil {
				return err
			}
		}
		return nil
	}
	return b.deliver(ctx, in, r, lines, private)
}

// inTurn runs the line as soon as there is a place for one more command, or
// gives up when the time to work is over before that.
func (b *Bot) inTurn(ctx context.Context, in *discordgo.Interaction, job job) (reply.Reply, *Team, error) {
	select {
	case b.work <- struct{}{}:
		defer func() { <-b.work }()
		return b.execute(ctx, in, job)
	case <-ctx.Done():
		b.Log.ErrorContext(ctx, "a command found no place to run", "server", in.GuildID, "error", ctx.Err())
		return reply.Reply{}, nil, planner.Problemf(planner.Busy, "Too many commands are running.").
			WithHint("Nothing was done; try again in a minute.").WithCause(ctx.Err())
	}
}

// execute runs the line for the caller in the server's own team.
func (b *Bot) execute(ctx context.Context, in *discordgo.Interaction, job job) (reply.Reply, *Team, error) {
	team, err := b.House.Team(ctx, in.GuildID)
	if err != nil {
		return reply.Reply{}, nil, err
	}
	req, err := b.request(ctx, in, team, job)
	if err != nil {
		return reply.Reply{}, team, err
	}
	if err := b.ownChannels(ctx, in, team, req.Line); err != nil {
		return reply.Reply{}, team, err
	}
	r, err := team.Table.Run(ctx, req)
	if lacks := b.lacking(in, req.Line); err == nil && lacks != "" {
		r.Add(reply.Text(lacks))
	}
	return r, team, err
}

// posting are the permissions that posts take, in the order and the words of
// the service's own settings.
var posting = []struct {
	bit  int64
	name string
}{
	{discordgo.PermissionViewChannel, "View Channel"}, {discordgo.PermissionSendMessages, "Send Messages"},
	{discordgo.PermissionEmbedLinks, "Embed Links"}, {discordgo.PermissionAttachFiles, "Attach Files"},
	{discordgo.PermissionReadMessageHistory, "Read Message History"},
}

// lacking says which permissions the bot lacks where it was asked to do
// something in the channel the command came from: better told now than at the
// first post.
func (b *Bot) lacking(in *discordgo.Interaction, line string) string {
	call, err := b.Table.ParseLine(line)
	if err != nil || in.AppPermissions&discordgo.PermissionAdministrator != 0 {
		return ""
	}
	for _, option := range call.Command.Options {
		if channel, given := call.Values.Text(option.Name); option.Kind != command.ChatChannel || given && channel != in.ChannelID {
			continue
		}
		var lacks []string
		for _, one := range posting {
			if in.AppPermissions&one.bit == 0 {
				lacks = append(lacks, one.name)
			}
		}
		if len(lacks) > 0 {
			return "In this channel I still lack: " + strings.Join(lacks, ", ") + ". Without these a post is not sent."
		}
	}
	return ""
}

// request is the command line with its caller, its time and its site.
func (b *Bot) request(ctx context.Context, in *discordgo.Interaction, team *Team, job job) (command.Request, error) {
	setup, err := team.Book.Setup(ctx)
	if err != nil {
		return command.Request{}, err
	}
	caller, err := callerOf(in.Member, setup)
	if err != nil {
		return command.Request{}, err
	}
	return command.Request{Caller: caller, Now: b.Now(), Channel: in.ChannelID,
		Line: b.inChannel(job.line, setup, in.ChannelID),
		OpenFile: func(name string) (io.ReadCloser, error) {
			file := job.asked.attachmentNamed(name)
			if file == nil {
				return nil, planner.Problemf(planner.Missing, "No file is attached.").WithHint("Attach it to the command itself.")
			}
			return b.download(ctx, file)
		}}, nil
}

// callerOf is who acts. Who may manage the server is a lead; everybody else
// has the role of their groups, or none.
func callerOf(member *discordgo.Member, setup planner.Setup) (command.Caller, error) {
	name := member.Nick
	if name == "" {
		name = member.User.GlobalName
	}
	if name == "" {
		name = member.User.Username
	}
	caller := command.Caller{ID: member.User.ID, Name: plainLine(name)}
	if member.Permissions&(discordgo.PermissionManageGuild|discordgo.PermissionAdministrator) != 0 {
		caller.Role = command.Lead
		return caller, nil
	}
	role, known := setup.RoleOf(member.Roles)
	if !known {
		return caller, planner.Problemf(planner.Forbidden, "You are not on the crew.").
			WithHint("Ask a lead to give you a crew group of this server.")
	}
	if role == planner.LeadRole {
		caller.Role = command.Lead
	}
	return caller, nil
}

// inChannel adds the site that the channel is about, where the command takes
// one and none is given.
func (b *Bot) inChannel(line string, setup planner.Setup, channel string) string {
	site, bound := setup.SiteIn(channel)
	if !bound {
		return line
	}
	found, given, ok := b.Table.Begun(line)
	if !ok || given.Has("site") {
		return line
	}
	if option, takes := found.Option("site"); !takes || option.Kind != command.Name {
		return line
	}
	return line + " " + strings.TrimPrefix(command.Line("", command.Pair{Name: "site", Value: site.Name}), "/ ")
}

// ownChannels refuses a line that names a channel of another server, or one
// that the bot cannot see.
func (b *Bot) ownChannels(ctx context.Context, in *discordgo.Interaction, team *Team, line string) error {
	call, err := team.Table.ParseLine(line)
	if err != nil {
		return nil // told when it is run
	}
	for _, option := range call.Command.Options {
		channel, given := call.Values.Text(option.Name)
		if option.Kind != command.ChatChannel || !given || channel == in.ChannelID {
			continue
		}
		found, err := b.rest.Channel(channel, discordWait(ctx)...)
		switch status := statusOf(err); {
		case err == nil && found.GuildID == in.GuildID:
		case err == nil, status >= 400 && status < 500 && status != 429:
			return planner.Problemf(planner.NotFound, "This server has no such channel that I can see.").
				WithHint("Choose it from the list, and let me view it.")
		default:
			return planner.Problemf(planner.Busy, "The chat service did not say whether that channel is yours.").WithHint("Try again.").WithCause(err)
		}
	}
	return nil
}

// wrong is the reply of an error, with a button to a form where a form can ask
// for what is missing.
func wrong(err error) reply.Reply {
	r := reply.OfError(err)
	var missing *command.MissingOptions
	if !errors.As(err, &missing) {
		return r
	}
	var names []string
	for _, option := range missing.Options {
		if option.Kind != command.File {
			names = append(names, option.Name)
		}
	}
	if len(names) > 0 {
		r.Add(reply.Actions{{Label: "Fill in…", Line: missing.Line, Ask: strings.Join(names, ",")}})
	}
	return r
}

// complete offers values for the option being typed.
func (b *Bot) complete(ctx context.Context, in *discordgo.Interaction, asked asked) error {
	team, err := b.House.Team(ctx, in.GuildID)
	if err != nil {
		return errors.Join(err, b.answerChoices(ctx, in, nil))
	}
	req, err := b.request(ctx, in, team, job{line: asked.line()})
	if err != nil {
		return b.answerChoices(ctx, in, nil) // not on the crew
	}
	for _, option := range asked.options {
		if option.Focused {
			prefix, _ := option.Value.(string)
			return b.answerChoices(ctx, in, team.Table.Suggest(ctx, req, option.Name, prefix))
		}
	}
	return b.answerChoices(ctx, in, nil)
}

// answerChoices answers a completion; the library would leave out an empty list.
func (b *Bot) answerChoices(ctx context.Context, in *discordgo.Interaction, values []string) error {
	const most, longest = 25, 100
	type choice struct {
		Name  string `json:"name"`
		Value string `json:"value"`
	}
	choices := []choice{}
	for _, value := range values {
		if n := unitsOf(value); n >= 1 && n <= longest && len(choices) < most && utf8.ValidString(value) {
			choices = append(choices, choice{value, value})
		}
	}
	return b.answer(ctx, in, typed{Type: discordgo.InteractionApplicationCommandAutocompleteResult, Data: map[string]any{"choices": choices}})
}
