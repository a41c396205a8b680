package main

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// usageError is wrong usage: status 2.
type usageError struct{ error }

func (e usageError) Unwrap() error { return e.error }

func usagef(format string, args ...any) error { return usageError{fmt.Errorf(format, args...)} }

// arguments returns a check for so many arguments with the names.
func arguments(names ...string) cobra.PositionalArgs {
	return func(_ *cobra.Command, given []string) error {
		if len(given) > len(names) {
			return usagef("%q is one argument too many", given[len(names)])
		}
		if len(given) < len(names) {
			return usagef("%s is missing", names[len(given)])
		}
		return nil
	}
}

// unknownCommand returns the error for arguments that begin with no command of
// root, nil where they do.
func unknownCommand(root *cobra.Command, args []string) error {
	_, _, err := root.Find(args)
	if err == nil {
		return nil
	}
	var word string
	if _, scanning := fmt.Sscanf(err.Error(), "unknown command %q", &word); scanning != nil {
		return usageError{err}
	}
	return usagef("unknown command: %s%s", word, didYouMean("", root.SuggestionsFor(word)))
}

// wrongFlag returns what is wrong with a command's flag as a sentence.
func wrongFlag(command *cobra.Command, err error) error {
	var unknown *pflag.NotExistError
	var invalid *pflag.InvalidValueError
	var bare *pflag.ValueRequiredError
	switch {
	case errors.As(err, &unknown) && unknown.GetSpecifiedShortnames() != "":
		return usagef("unknown flag: -%s", unknown.GetSpecifiedShortnames())
	case errors.As(err, &unknown):
		name := unknown.GetSpecifiedName()
		return usagef("unknown flag: --%s%s", name, didYouMean("--", similarFlags(command, name)))
	case errors.As(err, &invalid):
		return usagef("--%s %q: %s", invalid.GetFlag().Name, invalid.GetValue(), wrongValue(invalid))
	case errors.As(err, &bare):
		_, use := pflag.UnquoteUsage(bare.GetFlag())
		return usagef("--%s needs a value: %s", bare.GetFlag().Name, use)
	}
	return usageError{err}
}

// wrongValue says what a flag takes instead of the value.
func wrongValue(invalid *pflag.InvalidValueError) string {
	tooLarge := errors.Is(invalid, strconv.ErrRange)
	switch kind := invalid.GetFlag().Value.Type(); {
	case kind == "bool":
		return "it takes no value, or true or false"
	case tooLarge:
		return "it is beyond what can be computed with"
	case strings.HasPrefix(kind, "int"):
		return "it is no whole number"
	case kind == "float64":
		return "it is no number"
	case kind == "duration":
		return "it is no time with its unit, such as 5s or 2m"
	}
	return errors.Unwrap(invalid).Error()
}

// similarFlags returns the command's flags that are spelt like the name.
func similarFlags(command *cobra.Command, name string) []string {
	// The spelling is compared as that of commands is.
	flags := &cobra.Command{SuggestionsMinimumDistance: 2}
	command.Flags().VisitAll(func(flag *pflag.Flag) {
		if !flag.Hidden {
			flags.AddCommand(&cobra.Command{Use: flag.Name, Run: func(*cobra.Command, []string) {}})
		}
	})
	return flags.SuggestionsFor(name)
}

func didYouMean(dashes string, names []string) string {
	if len(names) == 0 {
		return ""
	}
	return "; did you mean " + dashes + strings.Join(names, " or "+dashes) + "?"
}

// helpCommand prints a command's help; cobra's own ends with status 0 where there
// is no such command.
func (p *program) helpCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "help [COMMAND]",
		Short:   "Say how a command is used",
		Long:    `Help prints what a command does, its flags and an example.`,
		Example: `  tickdrawer help import`,
		RunE: func(command *cobra.Command, words []string) error {
			root := command.Root()
			if err := unknownCommand(root, words); err != nil {
				return err
			}
			about, rest, err := root.Find(words)
			if err != nil {
				return usageError{err}
			}
			if len(rest) > 0 {
				return usagef("%q is one argument too many", rest[0])
			}
			about.InitDefaultHelpFlag()
			return about.Help()
		},
	}
}
