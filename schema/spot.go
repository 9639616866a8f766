package schema

import (
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"
)

// Spot is what stands, or could stand, at an offset of a text that need not parse: it is found from the text before the offset alone.
type Spot struct {
	Pointer string   // of the mapping that a key is typed in, or of the value that is typed
	Value   bool     // a value is typed, not a key
	Start   int      // where what is typed begins
	Typed   string   // up to the offset
	Keys    []string // in the mapping already, before the offset
	Quoted  bool     // keys are written in quotes here
}

// SpotAt finds the spot at an offset; ok is false in a comment, and inside a quoted value or text of several lines.
func SpotAt(text []byte, offset int) (s Spot, ok bool) {
	offset = min(max(offset, 0), len(text))
	for offset > 0 && offset < len(text) && !utf8.RuneStart(text[offset]) {
		offset--
	}
	o := sketch{text: string(text[:offset]), frames: []frame{{indent: -1, under: -1}}}
	return o.run()
}

// frame is a mapping or list that is open at the place that is read.
type frame struct {
	pointer string
	flow    bool // in braces or brackets
	list    bool
	indent  int // of its entries, −1: none yet
	under   int // they stand further in than this
	next    int // index of the next item
	keys    []string
	key     string // flow: whose value comes now, "" before a key
	behind  bool   // flow: a colon was read, a value comes
}

// sketch reads a text line by line for its structure only: indents, dashes, keys, braces.
type sketch struct {
	text   string
	frames []frame
	spot   Spot
	ok     bool
}

func (o *sketch) top() *frame { return &o.frames[len(o.frames)-1] }

func (o *sketch) pop() { o.frames = o.frames[:len(o.frames)-1] }

func (o *sketch) run() (Spot, bool) {
	at := 0
	for {
		end := strings.IndexByte(o.text[at:], '\n')
		last := end < 0
		if last {
			end = len(o.text)
		} else {
			end += at
		}
		if o.top().flow {
			o.flowing(at, end, last)
		} else {
			o.line(at, end, last)
		}
		if last {
			return o.spot, o.ok
		}
		at = end + 1
	}
}

// line reads one line of block style from at to end.
func (o *sketch) line(at, end int, last bool) {
	start := at
	for at < end && (o.text[at] == ' ' || o.text[at] == '\t') {
		at++
	}
	content := strings.TrimRight(o.text[at:end], "\r")
	if content == "" && !last || strings.HasPrefix(content, "#") || content == "---" {
		return
	}
	o.entry(at, at+len(content), at-start, last)
}

// entry reads a key or an item that begins at a column.
func (o *sketch) entry(at, end, column int, last bool) {
	content := o.text[at:end]
	dash := content == "-" || strings.HasPrefix(content, "- ")
	for len(o.frames) > 1 {
		f := o.top()
		if f.indent >= 0 && column < f.indent || f.indent < 0 && (column < f.under || column == f.under && !dash) || f.indent == column && f.list && !dash {
			o.pop()
			continue
		}
		break
	}
	f := o.top()
	if f.indent < 0 {
		f.indent = column
	}
	if dash {
		f.list = true
		item := frame{pointer: f.pointer + "/" + strconv.Itoa(f.next), indent: -1, under: column}
		f.next++
		o.frames = append(o.frames, item)
		rest := at + 1
		for rest < end && o.text[rest] == ' ' {
			rest++
		}
		if rest < end || last {
			o.entry(rest, end, column+rest-at, last)
		}
		return
	}
	o.keyed(at, end, column, last)
}

// keyed reads "key: value".
func (o *sketch) keyed(at, end, column int, last bool) {
	f := o.top()
	if at < end && (o.text[at] == '{' || o.text[at] == '[') {
		o.flowing(at, end, last)
		return
	}
	colon := colonIn(o.text[at:end])
	if colon < 0 {
		if last && !strings.Contains(o.text[at:end], " #") {
			typed := o.text[at:end]
			o.spot, o.ok = Spot{Pointer: f.pointer, Start: at, Typed: typed, Keys: f.keys}, true
		}
		return
	}
	key := strings.Trim(strings.TrimSpace(o.text[at:at+colon]), `"'`)
	f.keys = append(f.keys, key)
	pointer := f.pointer + "/" + escapePointer(key)
	value := at + colon + 1
	for value < end && o.text[value] == ' ' {
		value++
	}
	rest := o.text[value:end]
	switch {
	case strings.HasPrefix(rest, "{") || strings.HasPrefix(rest, "["):
		o.frames = append(o.frames, frame{pointer: pointer, indent: -1, under: column})
		o.flowing(value, end, last)
	case last && !strings.HasPrefix(rest, "#") && !strings.Contains(rest, " #") && !strings.HasPrefix(rest, "|") && !strings.HasPrefix(rest, ">"):
		o.spot, o.ok = Spot{Pointer: pointer, Value: true, Start: value, Typed: rest}, true
	case rest == "" || strings.HasPrefix(rest, "#"):
		o.frames = append(o.frames, frame{pointer: pointer, indent: -1, under: column})
	}
}

// colonIn is the index of the colon behind a key, −1 where there is none.
func colonIn(s string) int {
	quote := byte(0)
	for i := range len(s) {
		switch c := s[i]; {
		case quote != 0:
			if c == quote {
				quote = 0
			}
		case (c == '"' || c == '\'') && strings.TrimSpace(s[:i]) == "":
			quote = c
		case c == '#' && i > 0 && s[i-1] == ' ':
			return -1
		case c == ':' && (i+1 == len(s) || s[i+1] == ' '):
			return i
		}
	}
	return -1
}

// flowing reads flow style from at to end, up to the brace that closes the outermost.
func (o *sketch) flowing(at, end int, last bool) {
	token := at // where what is typed begins
	quote := byte(0)
	for i := at; i < end; i++ {
		c := o.text[i]
		if quote != 0 {
			if c == quote {
				quote = 0
			}
			continue
		}
		switch {
		case c == '"' || c == '\'':
			if strings.TrimSpace(o.text[token:i]) == "" {
				quote, token = c, i
			}
		case c == '#' && (i == at || o.text[i-1] == ' '):
			return
		case c == '{' || c == '[':
			o.frames = append(o.frames, frame{pointer: o.inside(), flow: true, list: c == '['})
			token = i + 1
		case c == '}' || c == ']':
			if o.top().flow {
				o.pop()
			}
			token = i + 1
			if !o.top().flow { // the value is complete
				return
			}
		case c == ',':
			f := o.top()
			f.behind, f.key = false, ""
			f.next++
			token = i + 1
		case c == ':' && o.top().flow && !o.top().list && !o.top().behind && (i+1 == end || o.text[i+1] == ' ' || o.text[token] == '"'):
			f := o.top()
			f.key = strings.Trim(strings.TrimSpace(o.text[token:i]), `"'`)
			f.keys = append(f.keys, f.key)
			f.behind = true
			token = i + 1
		}
	}
	if !last || !o.top().flow {
		return
	}
	f := o.top()
	for token < end && (o.text[token] == ' ' || o.text[token] == '\t' || o.text[token] == '\r') {
		token++
	}
	typed := o.text[token:end]
	o.ok = true
	o.spot = Spot{Pointer: f.pointer, Start: token, Typed: typed, Keys: slices.Clone(f.keys), Quoted: strings.HasPrefix(typed, `"`)}
	if f.behind || f.list {
		o.spot.Pointer, o.spot.Value = o.inside(), true
	}
}

// inside is the pointer of the value that comes next in the innermost mapping or list.
func (o *sketch) inside() string {
	f := o.top()
	switch {
	case !f.flow:
		return f.pointer
	case f.list:
		return f.pointer + "/" + strconv.Itoa(f.next)
	}
	return f.pointer + "/" + escapePointer(f.key)
}
