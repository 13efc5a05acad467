package species

import "testing"

func TestX(t *testing.T) {
	for _, w := range []string{"dog", "Giant Anteater", "Przewalskis  HORSE", "Canis lupus arctos", "Felis concolor", "tortoise", "Testudo", "elk", "giant antaeter", "anteater", "giant anteater (Myrmecophaga tridactyla)", "boa constrictor", "Cаnis lupus", "x\u202ey", "", "black vulture (Aegypius monachus)", "Ursus sp.", "panda", "vicuña", "zzzzzzz", "Abrothrix andina"} {
		a, err := Find(w)
		t.Log(w, "=>", a, err)
	}
	for _, w := range []string{"bats", "parrots", "snake", "vulture", "Felidae"} {
		var n []string
		for _, a := range Search(w) {
			n = append(n, a.Name)
		}
		t.Log(w, len(n), n[:min(5, len(n))])
	}
	t.Log(len(All()))
}
func BenchmarkFind(b *testing.B) {
	for b.Loop() {
		Find("giant anteater")
	}
}
func BenchmarkNear(b *testing.B) {
	for b.Loop() {
		Find("giant antaeter")
	}
}
