package main

import (
	"bytes"
	"encoding/json"
	"strconv"
	"strings"
	"unicode/utf8"
)

// outline is a value of a scenario file together with the place at which it stands, so that whatever is wrong with it
// can be shown there.
type outline struct {
	at      int        // byte at which it starts
	kind    json.Delim // '{' or '[', 0 for a plain value
	plain   any        // string, json.Number, bool or nil
	members []member   // of an object, in order
	items   []*outline // of a list
}

// member is one field of an object.
type member struct {
	name  string
	at    int // byte at which the name starts
	value *outline
}

// outlineOf reads JSON. Its errors are of type *json.SyntaxError, which tells the place.
func outlineOf(text []byte) (*outline, error) {
	var whole json.RawMessage
	if err := json.Unmarshal(text, &whole); err != nil {
		return nil, err
	}
	r := outliner{text: text, decoder: json.NewDecoder(bytes.NewReader(text))}
	r.decoder.UseNumber()
	return r.value()
}

// outliner reads the tokens of JSON that is known to be sound.
type outliner struct {
	text    []byte
	decoder *json.Decoder
}

// next is the next token and the byte at which it starts.
func (r outliner) next() (json.Token, int, error) {
	at := int(r.decoder.InputOffset())
	for at < len(r.text) && strings.IndexByte(" \t\r\n,:", r.text[at]) >= 0 {
		at++
	}
	token, err := r.decoder.Token()
	return token, at, err
}

func (r outliner) value() (*outline, error) {
	token, at, err := r.next()
	if err != nil {
		return nil, err
	}
	out := &outline{at: at}
	switch token {
	case json.Delim('{'):
		out.kind = '{'
		err = r.object(out)
	case json.Delim('['):
		out.kind = '['
		err = r.list(out)
	default:
		out.plain = token
	}
	return out, err
}

func (r outliner) object(out *outline) error {
	for r.decoder.More() {
		name, at, err := r.next()
		if err != nil {
			return err
		}
		value, err := r.value()
		if err != nil {
			return err
		}
		text, _ := name.(string) // names are always texts
		out.members = append(out.members, member{text, at, value})
	}
	_, err := r.decoder.Token() // the closing bracket
	return err
}

func (r outliner) list(out *outline) error {
	for r.decoder.More() {
		value, err := r.value()
		if err != nil {
			return err
		}
		out.items = append(out.items, value)
	}
	_, err := r.decoder.Token() // the closing bracket
	return err
}

// find is the byte at which a field stands, such as "scenario.segments[1].length_m": the deepest part of its path that
// is there. A missing field is thus looked for where it should be.
func (o *outline) find(path string) int {
	at := o.at
	for step := range strings.SplitSeq(strings.ReplaceAll(path, "[", ".["), ".") {
		if number, isIndex := strings.CutPrefix(step, "["); isIndex {
			i, err := strconv.Atoi(strings.TrimSuffix(number, "]"))
			if err != nil || i >= len(o.items) {
				return at
			}
			o = o.items[i]
			at = o.at
			continue
		}
		m := o.member(step)
		if m == nil {
			return at
		}
		at, o = m.at, m.value
	}
	return at
}

// member is the field of that name in the contract's spelling; nil where there is none.
func (o *outline) member(name string) *member {
	for i := range o.members {
		if m := &o.members[i]; m.name == name || contractName(m.name) == name {
			return m
		}
	}
	return nil
}

// lineAndColumn counts lines and characters up to a byte, both from 1.
func lineAndColumn(text []byte, at int) (line, column int) {
	before := text[:max(0, min(at, len(text)))]
	start := bytes.LastIndexByte(before, '\n') + 1
	return 1 + bytes.Count(before, []byte{'\n'}), 1 + utf8.RuneCount(before[start:])
}
