package dose

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"slices"
)

// maxJSONDepth bounds the nesting of a record; a worksheet nests 8 deep.
const maxJSONDepth = 32

type jsonKind uint8

const (
	jsonNull jsonKind = iota
	jsonTruth
	jsonNumber
	jsonText
	jsonList
	jsonObject
)

// jsonNode is a value of a JSON text. Unlike a map, an object keeps the order of
// its keys, and a number its digits.
type jsonNode struct {
	kind  jsonKind
	text  string // of a leaf: the decoded text, or the letters of a number
	raw   json.RawMessage
	keys  []string // of an object, beside items
	items []*jsonNode

	index map[string]int // of keys, when there are many
}

// manyKeys is the number of keys from which an index pays.
const manyKeys = 12

func (n *jsonNode) find(key string) int {
	if n.index == nil {
		return slices.Index(n.keys, key)
	}
	if i, ok := n.index[key]; ok {
		return i
	}
	return -1
}

// add puts a key behind the others; a key given twice has two values, of which
// programs take either.
func (n *jsonNode) add(key string) error {
	if n.find(key) >= 0 {
		return fmt.Errorf("the key %q is given twice", key)
	}
	n.keys = append(n.keys, key)
	switch {
	case n.index != nil:
		n.index[key] = len(n.keys) - 1
	case len(n.keys) == manyKeys:
		n.index = make(map[string]int, 2*manyKeys)
		for i, k := range n.keys {
			n.index[k] = i
		}
	}
	return nil
}

// naming are the keys by which an item of a list in a record tells itself from
// its neighbours, in the order in which they are asked.
var naming = []string{"slug", "name", "title", "basis", "what", "exponent", "model", "species", "temperature_c"}

// name is how an item of a list is told from others; every leaf and list has
// the same one, so that those are taken in order.
func (n *jsonNode) name() string {
	for _, key := range naming {
		if i := n.find(key); i >= 0 && len(n.items[i].items) == 0 {
			return key + "\x00" + n.items[i].text
		}
	}
	return ""
}

// readTree reads one JSON text.
func readTree(b []byte) (*jsonNode, error) {
	d := json.NewDecoder(bytes.NewReader(b))
	d.UseNumber()
	n, err := readNode(d, b, 0)
	if err != nil {
		if errors.Is(err, io.EOF) {
			err = errors.New("it ends too early")
		}
		return nil, err
	}
	if _, err := d.Token(); err != io.EOF {
		return nil, errors.New("something stands after its end")
	}
	return n, nil
}

func readNode(d *json.Decoder, b []byte, depth int) (*jsonNode, error) {
	if depth > maxJSONDepth {
		return nil, errors.New("it is nested too deep")
	}
	token, err := d.Token()
	if err != nil {
		return nil, err
	}
	n := &jsonNode{}
	switch t := token.(type) {
	case nil:
		n.kind, n.text = jsonNull, "null"
	case bool:
		n.kind, n.text = jsonTruth, "false"
		if t {
			n.text = "true"
		}
	case json.Number:
		n.kind, n.text = jsonNumber, t.String()
	case string:
		n.kind, n.text = jsonText, t
		n.raw = asJSON(t)
		return n, nil
	case json.Delim:
		start := d.InputOffset() - 1
		n.kind = jsonList
		if t == '{' {
			n.kind = jsonObject
		}
		for d.More() {
			if n.kind == jsonObject {
				key, err := d.Token()
				if err != nil {
					return nil, err
				}
				name, _ := key.(string)
				if err := n.add(name); err != nil {
					return nil, err
				}
			}
			item, err := readNode(d, b, depth+1)
			if err != nil {
				return nil, err
			}
			n.items = append(n.items, item)
		}
		if _, err := d.Token(); err != nil {
			return nil, err
		}
		n.raw = json.RawMessage(b[start:d.InputOffset()])
		return n, nil
	}
	n.raw = json.RawMessage(n.text)
	return n, nil
}

// asJSON writes a text as JSON with its letters as they are.
func asJSON(s string) json.RawMessage {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	_ = e.Encode(s) // a text can always be written
	return json.RawMessage(bytes.TrimSpace(b.Bytes()))
}
