package main

import (
	"github.com/spf13/cobra"
)

func newCompletion(std streams) *cobra.Command {
	return &cobra.Command{
		Use:   "completion SHELL",
		Short: "Print the script that completes commands and flags in bash, zsh, fish or powershell.",
		Example: `  standclear completion bash
  standclear completion zsh`,
		Args:      arguments(1, 1, "SHELL"),
		ValidArgs: []string{"bash", "zsh", "fish", "powershell"},
		RunE: func(cmd *cobra.Command, args []string) error {
			root := cmd.Root()
			switch args[0] {
			case "bash":
				return root.GenBashCompletionV2(std.out, true)
			case "zsh":
				return root.GenZshCompletion(std.out)
			case "fish":
				return root.GenFishCompletion(std.out, true)
			case "powershell":
				return root.GenPowerShellCompletionWithDesc(std.out)
			}
			return usageError{"SHELL", args[0], "is not a shell this can complete in; write bash, zsh, fish or powershell"}
		},
	}
}
