package species

import "testing"

// Known and Find agree on every name and spelling that either takes.
func TestKnown(t *testing.T) {
	for _, words := range []string{"giant anteater", "Myrmecophaga tridactyla", "Giant Anteater (Myrmecophaga tridactyla)", "Canis lupus familiaris",
		"Panthera tigris altaica", "dog", "tortoise", "no such animal", "", " ", "giant antaeter", "\u202egod", "giant anteater (dog)", "Ursus sp."} {
		a, err := Find(words)
		b, ok := Known(words)
		if ok != (err == nil) || ok && (a.Name != b.Name || a.MatchedAs != b.MatchedAs) || !ok && b != nil {
			t.Errorf("%q: Find %v %v, Known %v %v", words, a, err, b, ok)
		}
	}
	for _, a := range All() {
		if b, ok := Known(a.Name); !ok || b.Name != a.Name {
			t.Errorf("%s: %v %v", a.Name, b, ok)
		}
	}
}

func BenchmarkKnown(b *testing.B) {
	for _, words := range []string{"giant anteater", "animal number 7"} {
		b.Run(words, func(b *testing.B) {
			for b.Loop() {
				Known(words)
			}
		})
	}
}
