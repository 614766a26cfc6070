package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"strings"

	"github.com/polewright/polewright/spec"
	"github.com/polewright/polewright/tf"
)

// A job is what a job file asks for.
//
//	{
//	  "title": "…",
//	  "plant": "4 / (s (s + 2))",          ordinary algebra in s
//	  "controller": "(s + 1) / (s + 8)",   likewise; left out: 1
//	  "sensor": "50 / (s + 50)",           likewise; left out: 1
//	  "prefilter": "1 / (0.1 s + 1)",      likewise; left out: 1
//	  "sheet": [
//	    "overshoot at most 15 %",
//	    {"require": "settling time", "at most": "2 s", "band": "2 %"}
//	  ],
//	  "variants": [{"name": "heavy load", "plant": "3 / (s (s + 1.5))"}]
//	}
//
// A gain has to work on the plant and on every variant of it.
type job struct {
	title string
	loop  tf.Loop
	sheet spec.Sheet
	words []string // of the requirements, as in the file
	names []string // of the plant and its variants
	loops []tf.Loop
}

// A jobError reports a job file that cannot be used.
type jobError struct {
	File         string
	Line, Column int    // from 1; 0 if the file could not be read at all
	Place        string // such as "plant" or "sheet[2]"
	Err          error  // what is wrong, and what was expected
}

func (e *jobError) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	if e.Line > 0 {
		fmt.Fprintf(&b, ":%d:%d", e.Line, e.Column)
	}
	if e.Place != "" {
		b.WriteString(": " + e.Place)
	}
	return b.String() + ": " + e.Err.Error()
}

func (e *jobError) Unwrap() error { return e.Err }

// member is a member of a JSON object with the offset at which its value begins.
type member struct {
	name   string
	value  json.RawMessage
	offset int
}

// jobReader reads one file.
type jobReader struct {
	file string
	data []byte
}

func (r *jobReader) fail(offset int, place string, err error) error {
	before := r.data[:min(max(offset, 0), len(r.data))]
	return &jobError{File: r.file, Place: place, Err: err,
		Line:   1 + bytes.Count(before, []byte("\n")),
		Column: len([]rune(string(before[bytes.LastIndexByte(before, '\n')+1:]))) + 1}
}

// members takes a JSON object apart. Base is the offset of the object in the file.
func (r *jobReader) members(object []byte, base int, place, want string) ([]member, error) {
	d := json.NewDecoder(bytes.NewReader(object))
	if token, err := d.Token(); err != nil || token != json.Delim('{') {
		return nil, r.fail(base, place, fmt.Errorf("expected %s", want))
	}
	var out []member
	seen := map[string]bool{}
	for d.More() {
		at := base + skip(object, int(d.InputOffset()), " \t\r\n,")
		key, err := d.Token()
		if err != nil {
			return nil, r.fail(at, place, err)
		}
		name, _ := key.(string)
		if seen[name] {
			return nil, r.fail(at, place, fmt.Errorf("%q stands twice", name))
		}
		seen[name] = true
		start := base + skip(object, int(d.InputOffset()), " \t\r\n:")
		var value json.RawMessage
		if err := d.Decode(&value); err != nil {
			return nil, r.fail(start, place, err)
		}
		out = append(out, member{name, value, start})
	}
	return out, nil
}

func skip(data []byte, at int, over string) int {
	for at < len(data) && strings.IndexByte(over, data[at]) >= 0 {
		at++
	}
	return at
}

func (r *jobReader) syntax(err error) error {
	var syntax *json.SyntaxError
	if errors.As(err, &syntax) && !strings.Contains(syntax.Error(), "unexpected end") {
		return r.fail(int(syntax.Offset)-1, "", fmt.Errorf("no valid JSON: %v", err))
	}
	return r.fail(len(r.data), "", errors.New("no valid JSON: the file ends too early"))
}

func (r *jobReader) text(m member) (string, error) {
	var s string
	if err := json.Unmarshal(m.value, &s); err != nil {
		return "", r.fail(m.offset, m.name, errors.New("expected a text in quotation marks"))
	}
	return s, nil
}

func (r *jobReader) function(m member, place string) (tf.Function, error) {
	s, err := r.text(m)
	if err != nil {
		return tf.Function{}, err
	}
	g, err := tf.Parse(s)
	if err != nil {
		return tf.Function{}, r.fail(m.offset, place, err)
	}
	return g, nil
}

const wantJob = `an object with "plant" and "sheet", and if need be "title", "controller", "sensor", "prefilter" and "variants"`

// readJob reads a job file; name is used in errors only.
func readJob(name string, data []byte) (*job, error) {
	r := &jobReader{file: name, data: data}
	start := skip(data, 0, " \t\r\n")
	var whole json.RawMessage
	if err := json.Unmarshal(data, &whole); err != nil {
		return nil, r.syntax(err)
	}
	members, err := r.members(data[start:], start, "", wantJob)
	if err != nil {
		return nil, err
	}
	j := &job{names: []string{"plant"}}
	var variants, sheet *member
	plant := false
	for i, m := range members {
		switch m.name {
		case "title":
			j.title, err = r.text(m)
		case "plant":
			plant = true
			j.loop.Plant, err = r.function(m, m.name)
		case "controller":
			j.loop.Controller, err = r.function(m, m.name)
		case "sensor":
			j.loop.Sensor, err = r.function(m, m.name)
		case "prefilter":
			j.loop.Prefilter, err = r.function(m, m.name)
		case "sheet":
			sheet = &members[i]
		case "variants":
			variants = &members[i]
		default:
			err = r.fail(m.offset, "", fmt.Errorf("unknown name %q; expected %s", m.name, wantJob))
		}
		if err != nil {
			return nil, err
		}
	}
	switch {
	case !plant:
		return nil, r.fail(start, "", errors.New(`"plant" is missing; expected a transfer function such as "4 / (s (s + 2))"`))
	case sheet == nil:
		return nil, r.fail(start, "", errors.New(`"sheet" is missing; expected a list of requirements such as "overshoot at most 15 %"`))
	}
	if err := r.readSheet(j, *sheet); err != nil {
		return nil, err
	}
	j.loops = []tf.Loop{j.loop}
	if variants != nil {
		if err := r.readVariants(j, *variants); err != nil {
			return nil, err
		}
	}
	for i, l := range j.loops {
		open, err := l.Open()
		if err == nil && open.Numerator().Degree() > open.Denominator().Degree() {
			err = errors.New("controller, plant and sensor together are improper (more zeros than poles), which no machine can be; expected at least as many poles as zeros")
		}
		if err != nil {
			return nil, r.fail(start, j.names[i], err)
		}
	}
	return j, nil
}

// items takes a JSON array apart.
func (r *jobReader) items(m member, want string) ([]member, error) {
	d := json.NewDecoder(bytes.NewReader(m.value))
	if token, err := d.Token(); err != nil || token != json.Delim('[') {
		return nil, r.fail(m.offset, m.name, fmt.Errorf("expected %s", want))
	}
	var out []member
	for d.More() {
		start := skip(m.value, int(d.InputOffset()), " \t\r\n,")
		var value json.RawMessage
		if err := d.Decode(&value); err != nil {
			return nil, r.fail(m.offset+start, m.name, err)
		}
		out = append(out, member{fmt.Sprintf("%s[%d]", m.name, len(out)), value, m.offset + start})
	}
	return out, nil
}

func (r *jobReader) readSheet(j *job, m member) error {
	items, err := r.items(m, `a list of requirements such as ["overshoot at most 15 %"]`)
	if err != nil {
		return err
	}
	if len(items) == 0 {
		return r.fail(m.offset, m.name, errors.New("is empty; expected at least one requirement"))
	}
	vocabulary := spec.StandardVocabulary()
	for _, item := range items {
		var one spec.Sheet
		var words string
		if item.value[0] == '"' {
			if words, err = r.text(item); err != nil {
				return err
			}
			one, err = vocabulary.ParseText(words)
			if err == nil && len(one) != 1 {
				err = fmt.Errorf("%q holds %d requirements; expected one", words, len(one))
			}
			if err != nil {
				return r.fail(item.offset, item.name, reason(err))
			}
		} else {
			one, err = vocabulary.ParseJSON(append(append([]byte("["), item.value...), ']'))
			if err != nil {
				return r.fail(item.offset, item.name, reason(err))
			}
		}
		j.sheet = append(j.sheet, one...)
		if item.value[0] == '"' {
			j.words = append(j.words, strings.Join(strings.Fields(words), " "))
		} else {
			j.words = append(j.words, fmt.Sprint(one[0]))
		}
	}
	if err := j.sheet.Validate(); err != nil {
		return r.fail(m.offset, m.name, err)
	}
	return nil
}

// reason takes the place within the fragment off an error: the place in the file is told.
func reason(err error) error {
	var sheet *spec.SheetError
	if errors.As(err, &sheet) && sheet.Err != nil {
		return sheet.Err
	}
	return err
}

func (r *jobReader) readVariants(j *job, m member) error {
	const want = `an object with "name" and those of "plant", "controller", "sensor" that differ`
	items, err := r.items(m, "a list of variants, each "+want)
	if err != nil {
		return err
	}
	for _, item := range items {
		members, err := r.members(item.value, item.offset, item.name, want)
		if err != nil {
			return err
		}
		l, name := j.loop, ""
		for _, field := range members {
			switch field.name {
			case "name":
				name, err = r.text(field)
			case "plant":
				l.Plant, err = r.function(field, item.name+".plant")
			case "controller":
				l.Controller, err = r.function(field, item.name+".controller")
			case "sensor":
				l.Sensor, err = r.function(field, item.name+".sensor")
			default:
				err = r.fail(field.offset, item.name, fmt.Errorf("unknown name %q; expected %s", field.name, want))
			}
			if err != nil {
				return err
			}
		}
		if name == "" {
			return r.fail(item.offset, item.name, errors.New(`"name" is missing`))
		}
		j.names, j.loops = append(j.names, name), append(j.loops, l)
	}
	return nil
}
