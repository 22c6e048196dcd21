package main

import (
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

// readRequest reads a scenario file: the JSON form of a request. Fields that the contract does not have are errors,
// for a name that is spelt wrong would otherwise change the scenario without a word.
func readRequest(name string, in io.Reader) (*pb.SolveRequest, error) {
	text, err := readAll(name, in)
	if err != nil {
		return nil, err
	}
	out := &pb.SolveRequest{}
	if err := protojson.Unmarshal(text, out); err != nil {
		return nil, fmt.Errorf("%s%s", fileName(name), readable(err))
	}
	if out.GetScenario() == nil {
		return nil, fmt.Errorf("%s: scenario is missing; expected: {\"scenario\": {...}}", fileName(name))
	}
	return out, nil
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
		return nil, fmt.Errorf("%s: %w", fileName(name), err)
	}
	if len(text) > largestFile {
		return nil, fmt.Errorf("%s: larger than %d MiB", fileName(name), largestFile>>20)
	}
	return text, nil
}

// The parser's errors start with its name and a place: "proto: (line 3:7): unknown field ...".
var parserPlace = regexp.MustCompile(`^\(line (\d+):(\d+)\):\s*`)

// readable puts the place behind the file's name in the way editors and compilers write it.
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

// asError is errors.As, for any type of error.
func asError[E error](err error, target *E) bool { return errors.As(err, target) }
