package cli

import "github.com/spf13/cobra"

// commands lists the commands in the order in which help shows them.
func (app *App) commands() []*cobra.Command {
	return []*cobra.Command{
		newRoutesCommand(app),
		newJudgeCommand(app),
		newConvertCommand(app),
		newRulesCommand(app),
	}
}
