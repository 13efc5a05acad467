package dose

// FitRecord says that a dose was drafted from a line fitted to data.
type FitRecord struct {
	N int `json:"n"`
}
