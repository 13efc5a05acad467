package reports

import "tayra/dose"

// ProposedText sets a worksheet as the holding of a proposed regimen against
// the draft: the draft in its box, the cautions, the verdict, and then the
// concentrations of both (which o.Quiet leaves out). What the draft rests on is
// left to [Text].
func ProposedText(ws *dose.Worksheet, o TextOptions) []byte {
	t := newTerminal(o)
	t.head(ws, o)
	if ws.Drafted == nil {
		t.stopBox(ws)
	} else {
		t.draftBox(ws)
	}
	t.cautions(ws)
	t.publishedDoses(ws)
	t.proposed(ws)
	if !o.Quiet {
		t.concentrations(ws)
	}
	t.foot(ws)
	return t.b.Bytes()
}
