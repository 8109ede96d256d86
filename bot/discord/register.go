package discord

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"math"
	"strings"
	"unicode/utf16"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/command"
)

// register puts the table of commands in the place of what is registered, in
// one call, if it is another than the last time.
func (b *Bot) register(ctx context.Context, app string) error {
	if app == "" {
		return fmt.Errorf("the service named no application")
	}
	commands := Commands(b.Table)
	raw, err := json.Marshal(commands)
	if err != nil {
		return err
	}
	sum := sha256.Sum256(raw)
	now, name := hex.EncodeToString(sum[:]), "commands of "+app
	if before, err := b.House.Note(ctx, name); err != nil || before == now {
		return err
	}
	if _, err := b.rest.ApplicationCommandBulkOverwrite(app, "", commands); err != nil {
		return err
	}
	b.Log.InfoContext(ctx, "commands registered", "commands", len(commands))
	return b.House.SetNote(ctx, name, now)
}

// Limits of registered commands, from the service's documentation.
const (
	maxCommandUnits = 8000
	maxHelpUnits    = 100
)

// Commands is the table as the service registers it. Commands that the crew is
// not shown are hidden from who may not manage the server, which is the
// service's own first guess at who leads; rights are checked again at every
// use. Where a command's words together would be too long, the help of options
// is shortened.
func Commands(table command.Table) []*discordgo.ApplicationCommand {
	var all []*discordgo.ApplicationCommand
	byName := map[string]*discordgo.ApplicationCommand{}
	for _, c := range table.All() {
		name := strings.Fields(c.Path)[0]
		if byName[name] != nil {
			continue
		}
		var root *discordgo.ApplicationCommand
		for _, help := range []int{maxHelpUnits, 70, 50, 40, command.LeastHelp} {
			root = rooted(table, name, help)
			if characters(root.Name, root.Description, root.Options) <= maxCommandUnits {
				break
			}
		}
		byName[name] = root
		all = append(all, root)
	}
	return all
}

func rooted(table command.Table, name string, help int) *discordgo.ApplicationCommand {
	guildOnly := []discordgo.InteractionContextType{discordgo.InteractionContextGuild}
	installed := []discordgo.ApplicationIntegrationType{discordgo.ApplicationIntegrationGuildInstall}
	root := &discordgo.ApplicationCommand{Type: discordgo.ChatApplicationCommand, Name: name, Description: "/" + name, Contexts: &guildOnly, IntegrationTypes: &installed}
	hidden := true
	groups := map[string]*discordgo.ApplicationCommandOption{}
	for _, c := range table.All() {
		words := strings.Fields(c.Path)
		if words[0] != name {
			continue
		}
		hidden = hidden && !c.Listed
		switch len(words) {
		case 1:
			root.Description, root.Options = c.Short, options(c, help)
		case 2:
			root.Options = append(root.Options, sub(c, words[1], help))
		default:
			group := groups[words[1]]
			if group == nil {
				group = &discordgo.ApplicationCommandOption{Type: discordgo.ApplicationCommandOptionSubCommandGroup, Name: words[1], Description: words[1]}
				groups[words[1]] = group
				root.Options = append(root.Options, group)
			}
			group.Options = append(group.Options, sub(c, words[2], help))
		}
	}
	if hidden {
		manage := int64(discordgo.PermissionManageGuild)
		root.DefaultMemberPermissions = &manage
	}
	return root
}

func sub(c *command.Command, name string, help int) *discordgo.ApplicationCommandOption {
	return &discordgo.ApplicationCommandOption{Type: discordgo.ApplicationCommandOptionSubCommand, Name: name, Description: c.Short, Options: options(c, help)}
}

func options(c *command.Command, help int) []*discordgo.ApplicationCommandOption {
	var out []*discordgo.ApplicationCommandOption
	for i := range c.Options {
		o := &c.Options[i]
		option := &discordgo.ApplicationCommandOption{Type: optionType(o.Kind), Name: o.Name, Description: o.HelpWithin(help), Required: o.Required}
		for _, choice := range o.Choices {
			option.Choices = append(option.Choices, &discordgo.ApplicationCommandOptionChoice{Name: choice, Value: choice})
		}
		switch option.Type {
		case discordgo.ApplicationCommandOptionString:
			option.Autocomplete = len(o.Choices) == 0 && (o.Complete != nil || o.Kind == command.Day)
		case discordgo.ApplicationCommandOptionInteger, discordgo.ApplicationCommandOptionNumber:
			if o.Range != nil && !math.IsInf(o.Range.Min, 0) {
				least := o.Range.Min
				option.MinValue = &least
			}
			if o.Range != nil && !math.IsInf(o.Range.Max, 0) {
				option.MaxValue = o.Range.Max // 0 is not sent; the command checks it anyway
			}
		case discordgo.ApplicationCommandOptionChannel:
			option.ChannelTypes = []discordgo.ChannelType{discordgo.ChannelTypeGuildText, discordgo.ChannelTypeGuildNews}
		}
		out = append(out, option)
	}
	return out
}

func optionType(kind command.Kind) discordgo.ApplicationCommandOptionType {
	switch kind {
	case command.Number:
		return discordgo.ApplicationCommandOptionNumber
	case command.Whole:
		return discordgo.ApplicationCommandOptionInteger
	case command.Yes:
		return discordgo.ApplicationCommandOptionBoolean
	case command.File:
		return discordgo.ApplicationCommandOptionAttachment
	case command.ChatChannel:
		return discordgo.ApplicationCommandOptionChannel
	case command.ChatGroup:
		return discordgo.ApplicationCommandOptionRole
	}
	return discordgo.ApplicationCommandOptionString
}

// characters counts names, descriptions and values, as the service does.
func characters(name, description string, options []*discordgo.ApplicationCommandOption) int {
	sum := unitsOf(name) + unitsOf(description)
	for _, o := range options {
		sum += characters(o.Name, o.Description, o.Options)
		for _, choice := range o.Choices {
			sum += 2 * unitsOf(choice.Name)
		}
	}
	return sum
}

// unitsOf counts a text's UTF-16 units: the service does not say how it
// counts, and this is the stricter way.
func unitsOf(text string) int { return len(utf16.Encode([]rune(text))) }
