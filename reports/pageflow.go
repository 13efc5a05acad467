package reports

import "fmt"

// placing is a strip and its distance from the top of the body of a page.
type placing struct {
	strip *strip
	y     float64
}

// slack forgives the rounding of sums of heights.
const slack = 1e-6

// paginate deals the strips out on pages whose body is height points high.
//
// A chain of strips that keep together goes on one page when any page can
// hold it; a longer one starts where it stands if a third of the page is left,
// and is broken between strips where it must be. Strips of a table that begin
// a page have the head of the table set above them again.
func paginate(strips []strip, height float64) ([][]placing, error) {
	var pages [][]placing
	var page []placing
	y := 0.0
	turn := func() {
		pages = append(pages, page)
		page, y = nil, 0
	}
	for i := 0; i < len(strips); {
		end := i + 1
		for end < len(strips) && strips[end-1].keep {
			end++
		}
		chain := strips[i].height
		for k := i + 1; k < end; k++ {
			chain += strips[k].gap + strips[k].height
		}
		if len(page) > 0 && y+strips[i].gap+chain > height+slack {
			if headHeight(&strips[i])+chain <= height+slack || height-y < height/3 {
				turn()
			}
		}
		for ; i < end; i++ {
			s := &strips[i]
			if headHeight(s)+s.height > height+slack {
				return nil, fmt.Errorf("a block %.0f points high does not fit on a page with %.0f points between head and foot", s.height, height)
			}
			if len(page) > 0 && y+s.gap+s.height > height+slack {
				turn()
			}
			if len(page) == 0 {
				if s.head != nil {
					for k := range s.head.strips {
						page = append(page, placing{&s.head.strips[k], y})
						y += s.head.strips[k].height
					}
				}
			} else {
				y += s.gap
			}
			page = append(page, placing{s, y})
			y += s.height
		}
	}
	if len(page) > 0 || len(pages) == 0 {
		turn()
	}
	return pages, nil
}

func headHeight(s *strip) float64 {
	if s.head == nil {
		return 0
	}
	return s.head.height
}

// stack returns the height of strips set one under the other without a break,
// as a head or a foot is.
func stack(strips []strip) float64 {
	h := 0.0
	for i := range strips {
		if i > 0 {
			h += strips[i].gap
		}
		h += strips[i].height
	}
	return h
}
