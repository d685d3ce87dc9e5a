package main

// The help texts: a line of what it does, the usage, more where needed, the flags, the statuses.

func appHelp() string {
	return `ionfall: {{.Usage}}

Usage:
   ionfall COMMAND [FLAGS] [ARGUMENTS]

Commands:{{range .VisibleCommands}}
   {{.Name}}{{"\t"}}{{.Usage}}{{end}}

Every command tells more with --help. Flags may stand before and after the arguments; what follows
-- is no flag.

Start with:
   ionfall check argon.yaml
   ionfall run argon.yaml

` + statusHelp
}

func commandHelp() string {
	return `{{.HelpName}}: {{.Usage}}

Usage:
   {{.HelpName}}{{if .ArgsUsage}} {{.ArgsUsage}}{{end}}{{if .Description}}

{{.Description}}{{end}}

{{if .VisibleCommands}}Commands:{{range .VisibleCommands}}
   {{.Name}}{{"\t"}}{{.Usage}}{{end}}

{{end}}Flags:{{range .VisibleFlags}}
   {{.}}{{end}}

` + statusHelp
}

const statusHelp = `Exit status:
   0         done
   1         failed while working
   2         the input or the command line is wrong
   3         done, but the verdict on the results is fail
   130, 143  interrupted by Ctrl-C or by SIGTERM, with a checkpoint written (129: hang-up)
`
