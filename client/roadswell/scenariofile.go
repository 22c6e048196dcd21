package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"regexp"
	"strings"

	"google.golang.org/protobuf/encoding/protojson"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// largestFile bounds scenario files, bytes; a server takes in no more in any case.
const largestFile = 16 << 20

// scenarioFile is a file that was read.
type scenarioFile struct {
	name    string // as the user knows it
	text    []byte
	outline *outline
	request *pb.SolveRequest
}

// place is where a byte of the file stands, in the way editors and compilers write it.
func (f scenarioFile) place(at int) string {
	line, column := lineAndColumn(f.text, at)
	return fmt.Sprintf("%s:%d:%d", f.name, line, column)
}

// readScenario reads a scenario file: the JSON form of a request. Fields that the contract does not have are errors,
// for a name that is spelt wrong would otherwise change the scenario without a word.
func readScenario(name string, in io.Reader) (scenarioFile, error) {
	f := scenarioFile{name: fileName(name), request: &pb.SolveRequest{}}
	text, err := readAll(name, in)
	if err != nil {
		return f, err
	}
	f.text = bytes.TrimPrefix(text, []byte("\uFEFF")) // some editors put this mark before the text
	if len(bytes.TrimSpace(f.text)) == 0 {
		return f, fmt.Errorf("%s: the file is empty; expected: {\"scenario\": {...}}", f.name)
	}
	if f.outline, err = outlineOf(f.text); err != nil {
		return f, f.syntax(err)
	}
	if slips := f.slipsIn(f.request.ProtoReflect().Descriptor()); slips != "" {
		return f, errors.New(slips)
	}
	if err := protojson.Unmarshal(f.text, f.request); err != nil {
		return f, fmt.Errorf("%s%s", f.name, readable(err))
	}
	if f.request.GetScenario() == nil {
		return f, fmt.Errorf("%s: scenario is missing; expected: {\"scenario\": {...}}", f.name)
	}
	return f, nil
}

// syntax puts the place before what is wrong with the JSON.
func (f scenarioFile) syntax(err error) error {
	var wrong *json.SyntaxError
	if !errors.As(err, &wrong) {
		return fmt.Errorf("%s: %w", f.name, err)
	}
	at := int(wrong.Offset) - 1 // the offset counts the offending byte
	if at == len(f.text)-1 && strings.HasPrefix(wrong.Error(), "unexpected end") {
		at++
	}
	return fmt.Errorf("%s: not JSON: %w", f.place(at), err)
}

func readAll(name string, in io.Reader) ([]byte, error) {
	if name != "-" {
		f, err := os.Open(name)
		if err != nil {
			return nil, err
		}
		defer func() { _ = f.Close() }() // only read
		in = f
	}
	text, err := io.ReadAll(io.LimitReader(in, largestFile+1))
	if err != nil {
		return nil, err // names the file
	}
	if len(text) > largestFile {
		return nil, fmt.Errorf("%s: larger than %d MiB", fileName(name), largestFile>>20)
	}
	return text, nil
}

func fileName(name string) string {
	if name == "-" {
		return "standard input"
	}
	return name
}

// The parser's errors start with its name and a place: "proto: (line 3:7): duplicate field ...".
var parserPlace = regexp.MustCompile(`^\(line (\d+):(\d+)\):\s*`)

// readable puts the place behind the file's name.
func readable(err error) string {
	text := strings.TrimLeft(strings.TrimPrefix(strings.ReplaceAll(err.Error(), "\u00a0", " "), "proto:"), " ")
	text = strings.TrimPrefix(text, "syntax error ")
	text = parserField.ReplaceAllStringFunc(text, contractName)
	if m := parserPlace.FindStringSubmatch(text); m != nil {
		return fmt.Sprintf(":%s:%s: %s", m[1], m[2], text[len(m[0]):])
	}
	return ": " + text
}

// The parser names known fields in the spelling of JSON, "horizonS"; the contract and its errors say "horizon_s".
var parserField = regexp.MustCompile(` field [a-z]\w*`)

var capital = regexp.MustCompile(`[A-Z]`)

func contractName(name string) string {
	return capital.ReplaceAllStringFunc(name, func(c string) string { return "_" + strings.ToLower(c) })
}
