package discord

import (
	"context"
	"errors"
	"slices"
	"strings"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/planner"
)

// Limits of forms, from the service's documentation.
const (
	maxInputs      = 5
	maxFormTitle   = 45
	maxInputLabel  = 45
	maxPlaceholder = 100
	// usualInputs is how many inputs a form is filled up to with options that
	// are not required: those that come first are the ones most often given.
	usualInputs = 4
)

// pressed does what a button stands for.
func (b *Bot) pressed(ctx context.Context, in *discordgo.Interaction, id string) error {
	p, err := decode(ctx, b.linesOf(in.GuildID), id)
	if err != nil {
		return b.answerProblem(ctx, in, err)
	}
	switch p.kind {
	case refuseLine:
		return b.answer(ctx, in, typed{Type: discordgo.InteractionResponseUpdateMessage, Data: body{
			Embeds: []*discordgo.MessageEmbed{{Description: "Nothing was changed."}}, Components: []discordgo.MessageComponent{},
			AllowedMentions: discordgo.MessageAllowedMentions{Parse: []discordgo.AllowedMentionType{}}}})
	case confirmLine:
		return b.run(ctx, in, job{line: p.line, yes: true})
	case askOptions:
		return b.ask(ctx, in, p.line, strings.Split(p.extra, ","))
	case runLine:
		if missing := b.missing(p.line); missing != nil {
			var names []string
			for _, option := range missing.Options {
				names = append(names, option.Name)
			}
			return b.ask(ctx, in, p.line, names)
		}
		return b.run(ctx, in, job{line: p.line})
	}
	return b.answerProblem(ctx, in, planner.Problemf(planner.NotFound, "this button is too old").WithHint("Type the command instead."))
}

func (b *Bot) linesOf(server string) func(context.Context) (planner.LineKeeper, error) {
	return func(ctx context.Context) (planner.LineKeeper, error) {
		team, err := b.House.Team(ctx, server)
		if err != nil {
			return nil, err
		}
		return team.Lines, nil
	}
}

func (b *Bot) answerProblem(ctx context.Context, in *discordgo.Interaction, err error) error {
	var problem *planner.Problem
	if !errors.As(err, &problem) {
		b.Log.ErrorContext(ctx, "read a button", "error", err)
	}
	message, hint := reply.Wrong(err)
	return b.answerNow(ctx, in, strings.TrimSpace(message+" "+hint))
}

// missing says which options a line lacks before it can be read.
func (b *Bot) missing(line string) *command.MissingOptions {
	_, err := b.Table.ParseLine(line)
	var missing *command.MissingOptions
	if errors.As(err, &missing) && len(missing.Options) > 0 {
		return missing
	}
	return nil
}

// ask asks for options with a form, and for those that are most often given
// with them. Only text can be asked for: a file is attached to the command.
func (b *Bot) ask(ctx context.Context, in *discordgo.Interaction, line string, names []string) error {
	found, given, ok := b.Table.Begun(line)
	if !ok {
		return b.answerProblem(ctx, in, planner.Problemf(planner.NotFound, "this button is too old").WithHint("Type the command instead."))
	}
	var inputs []command.Option
	take := func(option command.Option) {
		if option.Kind != command.File && len(inputs) < maxInputs {
			inputs = append(inputs, option)
		}
	}
	for _, option := range found.Options {
		if slices.Contains(names, option.Name) {
			option.Required = true
			take(option)
		}
	}
	if len(inputs) == 0 {
		return b.answerProblem(ctx, in, planner.Problemf(planner.Missing, "A form cannot ask for that.").
			WithHint("Type /%s and attach the file.", found.Path))
	}
	for _, option := range found.Options {
		if !option.Required && !slices.Contains(names, option.Name) && !given.Has(option.Name) && option.Name != "site" && len(inputs) < usualInputs {
			take(option)
		}
	}
	keeper, err := b.linesOf(in.GuildID)(ctx)
	if err != nil {
		return b.answerProblem(ctx, in, err)
	}
	id, err := press{kind: formLine, line: line}.encode(ctx, keeper, b.Now())
	if err != nil {
		return b.answerProblem(ctx, in, err)
	}
	return b.answer(ctx, in, typed{Type: discordgo.InteractionResponseModal, Data: map[string]any{
		"custom_id": id, "title": shortened("/"+found.Path, maxFormTitle), "components": inputRows(inputs)}})
}

func inputRows(options []command.Option) []discordgo.MessageComponent {
	var all []discordgo.MessageComponent
	for _, option := range options {
		help := option.HelpWithin(maxInputLabel - unitsOf(option.Name) - 2)
		placeholder := option.Help
		if help == option.Help {
			placeholder = ""
		}
		if option.Example != "" {
			placeholder = strings.TrimPrefix(placeholder+", like "+option.Example, ", ")
		}
		input := discordgo.TextInput{CustomID: option.Name, Label: shortened(option.Name+": "+help, maxInputLabel), Style: discordgo.TextInputShort,
			Placeholder: shortened(placeholder, maxPlaceholder), Required: option.Required, MaxLength: 1000}
		if option.Kind == command.Text && !option.Required {
			input.Style = discordgo.TextInputParagraph
		}
		all = append(all, discordgo.ActionsRow{Components: []discordgo.MessageComponent{input}})
	}
	return all
}

// submitted runs a form's line with what was filled in.
func (b *Bot) submitted(ctx context.Context, in *discordgo.Interaction, data discordgo.ModalSubmitInteractionData) error {
	p, err := decode(ctx, b.linesOf(in.GuildID), data.CustomID)
	if err == nil && p.kind != formLine {
		err = planner.Problemf(planner.NotFound, "this form is too old").WithHint("Type the command instead.")
	}
	if err != nil {
		return b.answerProblem(ctx, in, err)
	}
	line := p.line
	for _, row := range data.Components {
		cells, ok := row.(*discordgo.ActionsRow)
		if !ok {
			continue
		}
		for _, cell := range cells.Components {
			if input, ok := cell.(*discordgo.TextInput); ok && strings.TrimSpace(input.Value) != "" && optionName(input.CustomID) {
				line += strings.TrimPrefix(command.Line("", command.Pair{Name: input.CustomID, Value: strings.TrimSpace(input.Value)}), "/")
			}
		}
	}
	return b.run(ctx, in, job{line: line})
}

// optionName says whether an input's id can be an option of ours: a form comes
// back from the user's side.
func optionName(id string) bool {
	return id != "" && id != "confirm" && !strings.ContainsFunc(id, func(r rune) bool { return (r < 'a' || r > 'z') && (r < '0' || r > '9') && r != '-' })
}
