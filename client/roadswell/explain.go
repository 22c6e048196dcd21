package main

import (
	"cmp"
	"errors"
	"fmt"
	"slices"
	"strings"

	"google.golang.org/grpc/codes"

	"github.com/roadswell/roadswell/client"
)

// explain says in the user's terms why a scenario was not solved: what the server says about fields under the file's
// name, line and column, in the order of the file.
func explain(o solveOptions, f scenarioFile, err error) error {
	var refused *client.Error
	switch {
	case !errors.As(err, &refused):
		return err
	case len(refused.Fields) > 0:
		return errors.New(f.fieldsText(o, refused))
	case refused.Reason != "": // the server read the file and cannot solve it
		return fmt.Errorf("%s: %s", f.name, refused.Message)
	case refused.Code == codes.DeadlineExceeded:
		return fmt.Errorf("--timeout is %s, and there was no answer by then; expected: longer, or less to solve", o.timeout)
	case refused.Code == codes.Unavailable && o.server != "":
		return fmt.Errorf("--server is %q, and no server answers there (%s)", o.server, dialFault(refused.Message))
	case o.server != "":
		return fmt.Errorf("--server is %q: %s", o.server, refused.Message)
	}
	return fmt.Errorf("%s: %s", f.name, refused.Message)
}

// fieldsText lists the fields, one a line.
func (f scenarioFile) fieldsText(o solveOptions, refused *client.Error) string {
	fields := slices.Clone(refused.Fields)
	slices.SortStableFunc(fields, func(a, b *client.FieldError) int {
		return cmp.Compare(f.outline.find(a.Field), f.outline.find(b.Field))
	})
	lines := make([]string, 0, len(fields)+1)
	for _, x := range fields {
		lines = append(lines, fmt.Sprintf("%s: %s", f.place(f.outline.find(x.Field)), x))
		if x.Field == "questions" && len(o.pictures) > 0 {
			lines = append(lines, f.name+": --picture asks for points, too; expected: a picture of the file without its questions")
		}
	}
	if n := refused.Metadata["fields_not_listed"]; n != "" {
		lines = append(lines, fmt.Sprintf("%s: and %s more", f.name, n))
	}
	return strings.Join(lines, "\n")
}

// dialFault is the end of the transport's report, which tells what the network said.
func dialFault(message string) string {
	if _, fault, found := strings.Cut(message, "Error while dialing: "); found {
		return strings.TrimRight(fault, `"`)
	}
	return message
}
