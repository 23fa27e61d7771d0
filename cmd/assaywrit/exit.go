package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/separation"
	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/trace"
)

// Exit statuses. They say whether the work was done and holds, never what was found.
const (
	exitDone       = 0
	exitFailed     = 1 // could not be done: file system, internal
	exitUsage      = 2 // the command line was wrong
	exitRefused    = 3 // the inputs were refused: every problem is listed
	exitFiles      = 4 // verification: a file is missing, added or changed
	exitSignatures = 5 // verification: a signature does not hold, is missing, or is not trusted
	exitValues     = 6 // verification: running again gave another value or decision
)

// A failure is an error with the status it ends with, and advice.
type failure struct {
	status int
	cause  error
	hint   string
}

func (f *failure) Error() string { return f.cause.Error() }
func (f *failure) Unwrap() error { return f.cause }

func usage(format string, args ...any) error {
	return &failure{exitUsage, fmt.Errorf(format, args...), "see assaywrit -h"}
}

// errQuiet ends a command whose messages have been printed already.
var errQuiet = errors.New("already reported")

// statusOf tells which status an error ends with: problems in inputs are recognised by their type.
func statusOf(err error) int {
	var f *failure
	if errors.As(err, &f) {
		return f.status
	}
	if isInput(err) {
		return exitRefused
	}
	return exitFailed
}

func isInput(err error) bool {
	var problem *strictyaml.Problem
	var problems strictyaml.Problems
	var syntax *trace.SyntaxError
	var interval *peak.IntervalError
	var points *peak.TraceError
	var parameter *peak.ParameterError
	var runs *separation.Error
	return errors.As(err, &runs) || errors.As(err, &problem) || errors.As(err, &problems) || errors.As(err, &syntax) || errors.As(err, &interval) || errors.As(err, &points) || errors.As(err, &parameter)
}

// report prints an error, each of its parts as cause and advice on two lines.
func report(w io.Writer, err error) {
	for _, part := range parts(err) {
		if errors.Is(part, errQuiet) {
			continue
		}
		fmt.Fprintf(w, "assaywrit: error: %v\n", part)
		if h := hintOf(part); h != "" {
			fmt.Fprintf(w, "assaywrit: hint: %s\n", h)
		}
	}
}

// parts takes apart joined errors and lists of problems.
func parts(err error) []error {
	var f *failure
	if errors.As(err, &f) && f.hint == "" {
		return parts(f.cause)
	}
	var problems casefile.Problems
	if errors.As(err, &problems) {
		list := make([]error, 0, len(problems))
		for i := range problems {
			list = append(list, &problems[i])
		}
		return list
	}
	if joined, ok := err.(interface{ Unwrap() []error }); ok {
		var list []error
		for _, e := range joined.Unwrap() {
			list = append(list, parts(e)...)
		}
		return list
	}
	return []error{err}
}

func hintOf(err error) string {
	var f *failure
	if errors.As(err, &f) && f.hint != "" {
		return f.hint
	}
	var problem *strictyaml.Problem
	if errors.As(err, &problem) {
		return problem.Hint
	}
	var syntax *trace.SyntaxError
	if errors.As(err, &syntax) {
		return syntax.Hint
	}
	if errors.Is(err, fs.ErrExist) {
		return "choose another name with -o, or replace it with --force"
	}
	return ""
}
