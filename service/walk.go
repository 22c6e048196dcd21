package service

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"google.golang.org/protobuf/proto"
	"google.golang.org/protobuf/reflect/protoreflect"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// checkFinite reports every number in the message that is infinite or not a number, under its path. It serves
// requests and, as the last line of defence, responses.
func checkFinite(m proto.Message, v *violations) { finiteMessage(m.ProtoReflect(), "", v) }

func finiteMessage(m protoreflect.Message, path string, v *violations) {
	m.Range(func(fd protoreflect.FieldDescriptor, value protoreflect.Value) bool {
		at := join(path, string(fd.Name()))
		if fd.IsList() {
			finiteList(fd, value.List(), at, v)
			return true
		}
		finiteValue(fd, value, at, v)
		return true
	})
}

func finiteList(fd protoreflect.FieldDescriptor, list protoreflect.List, path string, v *violations) {
	if fd.Kind() != protoreflect.DoubleKind && fd.Kind() != protoreflect.MessageKind {
		return
	}
	for i := range list.Len() {
		if fd.Kind() == protoreflect.DoubleKind && isFinite(list.Get(i).Float()) {
			continue // without the cost of printing its path
		}
		finiteValue(fd, list.Get(i), fmt.Sprintf("%s[%d]", path, i), v)
	}
}

func finiteValue(fd protoreflect.FieldDescriptor, value protoreflect.Value, path string, v *violations) {
	switch fd.Kind() {
	case protoreflect.MessageKind:
		finiteMessage(value.Message(), path, v)
	case protoreflect.DoubleKind:
		if x := value.Float(); !isFinite(x) {
			v.add(path, pb.FieldReason_FIELD_REASON_FINITE, printNumber(x), "a finite number")
		}
	}
}

func isFinite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

func printNumber(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

// longestText is how much of a text is quoted back, so that a long one cannot burst the error's frame.
const longestText = 60

func printText(s string) string {
	if len(s) > longestText {
		return strconv.Quote(s[:longestText]) + "..."
	}
	return strconv.Quote(s)
}

func join(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}

// valueAt prints what stands at a path of the message, as the caller gave it: "" for what is absent and for
// whole messages.
func valueAt(m proto.Message, path string) string {
	at := m.ProtoReflect()
	steps := strings.Split(path, ".")
	for i, step := range steps {
		fd, value, ok := valueOfStep(at, step)
		if !ok {
			return ""
		}
		if fd.Kind() != protoreflect.MessageKind {
			return printValue(fd, value)
		}
		if i == len(steps)-1 || (fd.IsList() && !strings.HasSuffix(step, "]")) {
			return ""
		}
		at = value.Message()
	}
	return ""
}

// valueOfStep looks up one step of a path: "name" or "name[3]".
func valueOfStep(m protoreflect.Message, step string) (protoreflect.FieldDescriptor, protoreflect.Value, bool) {
	name, rest, indexed := strings.Cut(step, "[")
	fd := m.Descriptor().Fields().ByName(protoreflect.Name(name))
	if fd == nil || (fd.HasPresence() && !m.Has(fd)) {
		return nil, protoreflect.Value{}, false
	}
	value := m.Get(fd)
	if !indexed {
		return fd, value, true
	}
	i, err := strconv.Atoi(strings.TrimSuffix(rest, "]"))
	if err != nil || !fd.IsList() || i < 0 || i >= value.List().Len() {
		return nil, protoreflect.Value{}, false
	}
	return fd, value.List().Get(i), true
}

func printValue(fd protoreflect.FieldDescriptor, value protoreflect.Value) string {
	switch {
	case fd.Kind() == protoreflect.DoubleKind:
		if x, ok := value.Interface().(float64); ok {
			return printNumber(x)
		}
	case fd.Kind() == protoreflect.StringKind:
		if s, ok := value.Interface().(string); ok {
			return printText(s)
		}
	case fd.Kind() == protoreflect.EnumKind:
		if n, ok := value.Interface().(protoreflect.EnumNumber); ok {
			return strconv.Itoa(int(n))
		}
	}
	return ""
}
