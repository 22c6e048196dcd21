package main

import (
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"google.golang.org/protobuf/reflect/protoreflect"
)

// slip is something in a file that the contract does not have: a field or a value of the wrong kind.
type slip struct {
	at   int // byte
	text string
}

// speller collects the slips of a file, all of them, where the parser would stop at the first.
type speller struct {
	slips []slip
}

func (s *speller) add(at int, format string, args ...any) {
	s.slips = append(s.slips, slip{at, fmt.Sprintf(format, args...)})
}

// message checks an object against the message that it stands for. An absent value may be written null.
func (s *speller) message(o *outline, what string, md protoreflect.MessageDescriptor) {
	if o.kind != '{' {
		s.add(o.at, "%s is %s; expected: an object, {...}", what, o)
		return
	}
	chosen := map[protoreflect.Name]string{} // by oneof
	for _, m := range o.members {
		fd := fieldNamed(md, m.name)
		if fd == nil {
			s.add(m.at, "unknown field %q; expected: %s", m.name, fieldNames(md.Fields()))
			continue
		}
		if m.value.isNull() {
			continue
		}
		if one := fd.ContainingOneof(); one != nil && !one.IsSynthetic() {
			if other := chosen[one.Name()]; other != "" && other != m.name {
				s.add(m.at, "field %s beside %s; expected: only one of %s", m.name, other, fieldNames(one.Fields()))
			}
			chosen[one.Name()] = m.name
		}
		s.field(m.value, fd)
	}
}

func (s *speller) field(o *outline, fd protoreflect.FieldDescriptor) {
	if !fd.IsList() {
		s.value(o, fd)
		return
	}
	if o.kind != '[' {
		s.add(o.at, "%s is %s; expected: a list, [...]", fd.Name(), o)
		return
	}
	for _, item := range o.items {
		s.value(item, fd)
	}
}

func (s *speller) value(o *outline, fd protoreflect.FieldDescriptor) {
	switch fd.Kind() {
	case protoreflect.MessageKind:
		s.message(o, string(fd.Name()), fd.Message())
	case protoreflect.DoubleKind:
		s.number(o, fd)
	case protoreflect.BoolKind:
		if _, ok := o.plain.(bool); !ok {
			s.add(o.at, "%s is %s; expected: true or false", fd.Name(), o)
		}
	case protoreflect.StringKind:
		if _, ok := o.plain.(string); !ok {
			s.add(o.at, "%s is %s; expected: a text in quotation marks", fd.Name(), o)
		}
	case protoreflect.EnumKind:
		if !isValue(o, fd.Enum().Values()) {
			s.add(o.at, "%s is %s; expected: %s", fd.Name(), o, valueNames(fd.Enum().Values()))
		}
	}
}

// number accepts what the JSON form of the contract does: numbers, and numbers written as texts.
func (s *speller) number(o *outline, fd protoreflect.FieldDescriptor) {
	text := ""
	switch x := o.plain.(type) {
	case json.Number:
		text = x.String()
	case string:
		text = x
	}
	if text == "NaN" || text == "Infinity" || text == "-Infinity" {
		return // the server says what it thinks of them
	}
	if _, err := strconv.ParseFloat(text, 64); errors.Is(err, strconv.ErrRange) {
		s.add(o.at, "%s is %s; expected: a number of at most 1.8e308 in size", fd.Name(), o)
	} else if err != nil {
		s.add(o.at, "%s is %s; expected: a number", fd.Name(), o)
	}
}

func isValue(o *outline, values protoreflect.EnumValueDescriptors) bool {
	switch x := o.plain.(type) {
	case json.Number:
		return true // the server knows which numbers there are
	case string:
		return values.ByName(protoreflect.Name(x)) != nil
	}
	return false
}

// fieldNamed finds a field by either spelling that the JSON form of the contract has.
func fieldNamed(md protoreflect.MessageDescriptor, name string) protoreflect.FieldDescriptor {
	if fd := md.Fields().ByName(protoreflect.Name(name)); fd != nil {
		return fd
	}
	return md.Fields().ByJSONName(name)
}

func fieldNames(fields interface {
	Len() int
	Get(int) protoreflect.FieldDescriptor
}) string {
	names := make([]string, fields.Len())
	for i := range names {
		names[i] = string(fields.Get(i).Name())
	}
	return strings.Join(names, ", ")
}

// valueNames lists what may be stated; the first value of every enum means that nothing is.
func valueNames(values protoreflect.EnumValueDescriptors) string {
	var names []string
	for i := 1; i < values.Len(); i++ {
		names = append(names, string(values.Get(i).Name()))
	}
	return strings.Join(names, ", ")
}

func (o *outline) isNull() bool { return o.kind == 0 && o.plain == nil }

// longestQuote is how many bytes of a value are quoted back.
const longestQuote = 40

// String prints the value as far as a message about it needs.
func (o *outline) String() string {
	switch x := o.plain.(type) {
	case string:
		if len(x) > longestQuote {
			return strconv.Quote(x[:longestQuote]) + "..."
		}
		return strconv.Quote(x)
	case json.Number:
		return x.String()
	case bool:
		return strconv.FormatBool(x)
	}
	switch o.kind {
	case '{':
		return "an object"
	case '[':
		return "a list"
	}
	return "null"
}

// slipsListed is how many slips of a file are told; a file in another format would have one on every line.
const slipsListed = 20

// slipsIn lists what is misspelt, one a line, in the order of the file; "" where nothing is.
func (f scenarioFile) slipsIn(md protoreflect.MessageDescriptor) string {
	s := &speller{}
	s.message(f.outline, "the file", md)
	slices.SortStableFunc(s.slips, func(a, b slip) int { return a.at - b.at })
	var lines []string
	for i, x := range s.slips {
		if i == slipsListed {
			lines = append(lines, fmt.Sprintf("%s: and %d more", f.name, len(s.slips)-i))
			break
		}
		lines = append(lines, f.place(x.at)+": "+x.text)
	}
	return strings.Join(lines, "\n")
}
