package spec

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"maps"
	"slices"
	"strconv"
	"strings"
	"unicode"
)

// A Vocabulary maps the name of a requirement, as it stands in a sheet, to the function
// that reads the rest of the entry. [StandardVocabulary] holds the names of this package;
// add to it, or leave names out, to read sheets with requirements of one's own. There is no
// global registration.
type Vocabulary map[string]Reader

// A Reader makes a requirement of an entry of a sheet. Fields that it does not ask for are
// reported as unknown by the caller.
type Reader func(e *Entry) (Requirement, error)

// An Entry is one requirement of a sheet as written: its name and its fields, such as
// "at most" and "band". Readers take it apart, and requirements that can be written as text
// and JSON return one from a method Entry() (Entry, error).
type Entry struct {
	Requirement string
	Fields      []Field // in the order in which they are written

	asked map[string]bool
}

// A Field is one field of an [Entry]: a number in SI units with the unit it is written
// with, or any other JSON value.
type Field struct {
	Name   string
	Number float64
	Unit   string          // of Number, as written in text; empty for ratios
	JSON   json.RawMessage // where the field is not a number
}

// An EntryError reports a field of an entry that is missing, unknown or not understood.
type EntryError struct {
	Field  string
	Reason string
}

func (e *EntryError) Error() string {
	if e.Field == "" {
		return e.Reason
	}
	return fmt.Sprintf("%q: %s", e.Field, e.Reason)
}

var (
	errNoRequirement = errors.New("there is no requirement here")
	errWords         = errors.New("cannot be written: the requirement has no method Entry")
)

func (e *Entry) find(name string) (Field, bool) {
	if e.asked == nil {
		e.asked = map[string]bool{}
	}
	e.asked[name] = true
	for _, f := range e.Fields {
		if f.Name == name {
			return f, true
		}
	}
	return Field{}, false
}

// Has reports whether the entry has the field.
func (e *Entry) Has(name string) bool {
	_, ok := e.find(name)
	return ok
}

// Number returns a field that has to be there: a number, or a text of a number and a unit
// that fits the given one. The units are "" (a ratio; "%" and, for ratios, "dB" are read),
// "s", "s²", "rad" ("deg" is read) and "rad/s" ("Hz" is read).
func (e *Entry) Number(name, unit string) (float64, error) {
	d := plain
	switch unit {
	case "s":
		d = seconds
	case "s²":
		d = secondsSquared
	case "rad":
		d = radians
	case "rad/s":
		d = frequency
	}
	return e.quantity(name, d)
}

func (e *Entry) quantity(name string, d dimension) (float64, error) {
	f, ok := e.find(name)
	if !ok {
		return 0, &EntryError{Field: name, Reason: "is missing"}
	}
	if f.JSON == nil {
		return f.Number, nil
	}
	var text string
	switch f.JSON[0] {
	case '"':
		if err := json.Unmarshal(f.JSON, &text); err != nil {
			return 0, &EntryError{Field: name, Reason: err.Error()}
		}
	case '-', '0', '1', '2', '3', '4', '5', '6', '7', '8', '9':
		text = string(f.JSON)
	default:
		return 0, &EntryError{Field: name, Reason: "expected a number, or a text of a number and a unit"}
	}
	x, err := parseQuantity(text, d)
	if err != nil {
		return 0, &EntryError{Field: name, Reason: err.Error()}
	}
	return x, nil
}

// JSON returns a field that has to be there as the JSON it was written in; in a sheet of
// text that is a JSON string.
func (e *Entry) JSON(name string) (json.RawMessage, error) {
	f, ok := e.find(name)
	switch {
	case !ok:
		return nil, &EntryError{Field: name, Reason: "is missing"}
	case f.JSON == nil:
		return json.RawMessage(formatNumber(f.Number)), nil
	}
	return f.JSON, nil
}

// read makes the requirement and checks that no field is left over.
func (v Vocabulary) read(e *Entry) (Requirement, error) {
	reader, ok := v[e.Requirement]
	if !ok {
		return nil, &EntryError{Reason: fmt.Sprintf("%q is no known requirement; known are %s", e.Requirement, strings.Join(v.names(), ", "))}
	}
	seen := map[string]bool{}
	for _, f := range e.Fields {
		if seen[f.Name] {
			return nil, &EntryError{Field: f.Name, Reason: "stands twice"}
		}
		seen[f.Name] = true
	}
	r, err := reader(e)
	if err != nil {
		return nil, err
	}
	for _, f := range e.Fields {
		if !e.asked[f.Name] {
			return nil, &EntryError{Field: f.Name, Reason: "is no field of this requirement"}
		}
	}
	if err := validate(r); err != nil {
		return nil, err
	}
	return r, nil
}

func (v Vocabulary) names() []string { return slices.Sorted(maps.Keys(v)) }

// ParseJSON reads a sheet from JSON: an array of objects, each with the name of the
// requirement under "require" and its fields beside it,
//
//	[{"require": "overshoot", "at most": 0.15},
//	 {"require": "settling time", "at most": "2 s", "band": "2 %"}]
//
// A number without a unit is in SI units, a ratio or a fraction. Errors are *[SheetError],
// with the place.
func (v Vocabulary) ParseJSON(data []byte) (Sheet, error) {
	d := json.NewDecoder(bytes.NewReader(data))
	var entries []json.RawMessage
	if err := d.Decode(&entries); err != nil {
		return nil, &SheetError{Index: -1, Place: jsonPlace(data, err), Err: fmt.Errorf("expected an array of requirements: %w", err)}
	}
	if _, err := d.Token(); err != io.EOF {
		return nil, &SheetError{Index: -1, Err: errors.New("something follows the array of requirements")}
	}
	sheet := make(Sheet, 0, len(entries))
	for i, raw := range entries {
		place := fmt.Sprintf("[%d]", i)
		e, err := entryFromJSON(raw)
		if err != nil {
			return nil, &SheetError{Index: i, Place: placeOf(place, err), Err: err}
		}
		r, err := v.read(e)
		if err != nil {
			return nil, &SheetError{Index: i, Place: placeOf(place, err), Name: e.Requirement, Err: err}
		}
		sheet = append(sheet, r)
	}
	return sheet, nil
}

func placeOf(place string, err error) string {
	var field *EntryError
	if errors.As(err, &field) && field.Field != "" {
		return place + "." + strconv.Quote(field.Field)
	}
	return place
}

// jsonPlace returns line and column of a syntax error.
func jsonPlace(data []byte, err error) string {
	var syntax *json.SyntaxError
	offset := int64(len(data))
	switch {
	case errors.As(err, &syntax):
		offset = min(syntax.Offset, offset)
	case !errors.Is(err, io.ErrUnexpectedEOF):
		return ""
	}
	before := data[:offset]
	line := 1 + bytes.Count(before, []byte("\n"))
	return fmt.Sprintf("line %d, column %d", line, len(before)-bytes.LastIndexByte(before, '\n')-1)
}

func entryFromJSON(raw json.RawMessage) (*Entry, error) {
	d := json.NewDecoder(bytes.NewReader(raw))
	if t, err := d.Token(); err != nil || t != json.Delim('{') {
		return nil, &EntryError{Reason: `expected an object such as {"require": "overshoot", "at most": 0.15}`}
	}
	e := &Entry{}
	named := false
	for d.More() {
		key, err := d.Token()
		if err != nil {
			return nil, err
		}
		name := key.(string) // keys of an object are strings
		var value json.RawMessage
		if err := d.Decode(&value); err != nil {
			return nil, err
		}
		if name == "require" {
			if named {
				return nil, &EntryError{Field: name, Reason: "stands twice"}
			}
			named = true
			if err := json.Unmarshal(value, &e.Requirement); err != nil {
				return nil, &EntryError{Field: name, Reason: "expected the name of a requirement"}
			}
			continue
		}
		e.Fields = append(e.Fields, Field{Name: name, JSON: value})
	}
	if !named {
		return nil, &EntryError{Field: "require", Reason: "is missing"}
	}
	return e, nil
}

// ParseText reads a sheet from text, one requirement a line, in the form in which
// [Sheet.String] writes it:
//
//	overshoot at most 15 %
//	settling time at most 2 s, band 2 %
//
// Empty lines and what follows a # are skipped. Errors are *[SheetError] with the line.
func (v Vocabulary) ParseText(text string) (Sheet, error) {
	sheet := Sheet{}
	for n, line := range strings.Split(text, "\n") {
		line, _, _ = strings.Cut(line, "#")
		line = strings.TrimSpace(line)
		if line == "" {
			continue
		}
		place := fmt.Sprintf("line %d", n+1)
		e, err := v.entryFromText(line)
		if err != nil {
			return nil, &SheetError{Index: len(sheet), Place: place, Err: err}
		}
		r, err := v.read(e)
		if err != nil {
			return nil, &SheetError{Index: len(sheet), Place: place, Name: e.Requirement, Err: err}
		}
		sheet = append(sheet, r)
	}
	return sheet, nil
}

func (v Vocabulary) entryFromText(line string) (*Entry, error) {
	name := ""
	for word := range v {
		if len(word) > len(name) && strings.HasPrefix(line, word) && (len(line) == len(word) || line[len(word)] == ' ' || line[len(word)] == ',') {
			name = word
		}
	}
	if name == "" {
		return nil, &EntryError{Reason: fmt.Sprintf("%q does not start with a known requirement; known are %s", line, strings.Join(v.names(), ", "))}
	}
	e := &Entry{Requirement: name}
	rest := strings.TrimSpace(line[len(name):])
	if rest == "" {
		return e, nil
	}
	for part := range strings.SplitSeq(rest, ",") {
		part = strings.TrimSpace(part)
		at := strings.IndexFunc(part, func(r rune) bool { return unicode.IsDigit(r) || r == '-' || r == '+' || r == '.' })
		field := part
		value := ""
		if at >= 0 {
			field, value = strings.TrimSpace(part[:at]), part[at:]
		}
		if field == "" {
			return nil, &EntryError{Reason: fmt.Sprintf("%q names no field; expected such as \"at most 2\" or \"band 0.02\"", part)}
		}
		quoted, err := json.Marshal(value)
		if err != nil {
			return nil, err
		}
		e.Fields = append(e.Fields, Field{Name: field, JSON: quoted})
	}
	return e, nil
}

// ParseSheet reads a sheet from text with the standard vocabulary; see
// [Vocabulary.ParseText].
func ParseSheet(text string) (Sheet, error) { return StandardVocabulary().ParseText(text) }

// UnmarshalJSON reads a sheet with the standard vocabulary; see [Vocabulary.ParseJSON].
func (s *Sheet) UnmarshalJSON(data []byte) error {
	sheet, err := StandardVocabulary().ParseJSON(data)
	if err != nil {
		return err
	}
	*s = sheet
	return nil
}

// UnmarshalText reads a sheet with the standard vocabulary; see [Vocabulary.ParseText].
func (s *Sheet) UnmarshalText(text []byte) error {
	sheet, err := ParseSheet(string(text))
	if err != nil {
		return err
	}
	*s = sheet
	return nil
}

func entryOf(r Requirement) (Entry, error) {
	if r == nil {
		return Entry{}, errNoRequirement
	}
	if err := validate(r); err != nil {
		return Entry{}, err
	}
	w, ok := r.(interface{ Entry() (Entry, error) })
	if !ok {
		return Entry{}, errWords
	}
	return w.Entry()
}

// MarshalJSON writes the sheet in the form that [Vocabulary.ParseJSON] reads. A requirement
// without a method Entry, or with invalid limits, is a *[SheetError].
func (s Sheet) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	b.WriteByte('[')
	for i, r := range s {
		e, err := entryOf(r)
		if err != nil {
			return nil, &SheetError{Index: i, Err: err}
		}
		if i > 0 {
			b.WriteByte(',')
		}
		text, err := json.Marshal(e)
		if err != nil {
			return nil, &SheetError{Index: i, Name: e.Requirement, Err: err}
		}
		b.Write(text)
	}
	b.WriteByte(']')
	return b.Bytes(), nil
}

// MarshalJSON writes the entry as an object with "require" first.
func (e Entry) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	name, err := json.Marshal(e.Requirement)
	if err != nil {
		return nil, err
	}
	b.WriteString(`{"require":`)
	b.Write(name)
	for _, f := range e.Fields {
		name, err := json.Marshal(f.Name)
		if err != nil {
			return nil, err
		}
		b.WriteByte(',')
		b.Write(name)
		b.WriteByte(':')
		if f.JSON != nil {
			b.Write(f.JSON)
			continue
		}
		number, err := json.Marshal(f.Number)
		if err != nil {
			return nil, err
		}
		b.Write(number)
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

// String writes the entry as a line of a sheet.
func (e Entry) String() string {
	var b strings.Builder
	b.WriteString(e.Requirement)
	for i, f := range e.Fields {
		if i > 0 {
			b.WriteByte(',')
		}
		b.WriteByte(' ')
		b.WriteString(f.Name)
		b.WriteByte(' ')
		if f.JSON != nil {
			b.Write(f.JSON)
			continue
		}
		b.WriteString(withUnit(formatNumber(f.Number), f.Unit))
	}
	return b.String()
}

// String writes the sheet as text, one requirement a line.
func (s Sheet) String() string {
	var b strings.Builder
	for _, r := range s {
		if r == nil {
			b.WriteString("# missing\n")
			continue
		}
		b.WriteString(describe(r))
		b.WriteByte('\n')
	}
	return b.String()
}

// MarshalText writes the sheet in the form that [Vocabulary.ParseText] reads. A requirement
// without a method Entry, or with invalid limits, is a *[SheetError].
func (s Sheet) MarshalText() ([]byte, error) {
	var b strings.Builder
	for i, r := range s {
		e, err := entryOf(r)
		if err != nil {
			return nil, &SheetError{Index: i, Err: err}
		}
		b.WriteString(e.String())
		b.WriteByte('\n')
	}
	return []byte(b.String()), nil
}
