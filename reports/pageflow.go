package reports

import "fmt"

// placing is a band and its distance from the top of the body of a page.
type placing struct {
	band *band
	y    float64
}

// slack forgives the rounding of sums of heights.
const slack = 1e-6

// paginate deals the bands out on pages whose body is height points high.
//
// A chain of bands that keep together goes on one page when any page can
// hold it; a longer one starts where it stands if a third of the page is left,
// and is broken between bands where it must be. Bands of a table that begin
// a page have the head of the table set above them again.
func paginate(bands []band, height float64) ([][]placing, error) {
	var pages [][]placing
	var page []placing
	y := 0.0
	turn := func() {
		pages = append(pages, page)
		page, y = nil, 0
	}
	for i := 0; i < len(bands); {
		end := i + 1
		for end < len(bands) && bands[end-1].keep {
			end++
		}
		chain := bands[i].height
		for k := i + 1; k < end; k++ {
			chain += bands[k].gap + bands[k].height
		}
		if len(page) > 0 && y+bands[i].gap+chain > height+slack {
			if headHeight(&bands[i])+chain <= height+slack || height-y < height/3 {
				turn()
			}
		}
		for ; i < end; i++ {
			s := &bands[i]
			if headHeight(s)+s.height > height+slack {
				return nil, fmt.Errorf("a block %.0f points high does not fit on a page with %.0f points between head and foot", s.height, height)
			}
			if len(page) > 0 && y+s.gap+s.height > height+slack {
				turn()
			}
			if len(page) == 0 {
				if s.head != nil {
					for k := range s.head.bands {
						page = append(page, placing{&s.head.bands[k], y})
						y += s.head.bands[k].height
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

func headHeight(s *band) float64 {
	if s.head == nil {
		return 0
	}
	return s.head.height
}

// stack returns the height of bands set one under the other without a break,
// as a head or a foot is.
func stack(bands []band) float64 {
	h := 0.0
	for i := range bands {
		if i > 0 {
			h += bands[i].gap
		}
		h += bands[i].height
	}
	return h
}
