package cli

import "github.com/spf13/cobra"

// commands lists the commands in the order in which help shows them.
func (app *App) commands() []*cobra.Command {
	return []*cobra.Command{
		newRunCommand(app),
		newIdentifyCommand(app),
		newRoutesCommand(app),
		newCompareCommand(app),
		newSheetCommand(app),
		newMendCommand(app),
		newJudgeCommand(app),
		newConvertCommand(app),
		newDrawCommand(app),
		newShelfCommand(app),
		newRulesCommand(app),
	}
}
