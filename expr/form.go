package expr

// Form says how a function is written.
type Form struct {
	Amplitude bool
}
