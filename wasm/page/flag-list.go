package page

// FlagList is a list of warnings.
type FlagList struct{ List []string }
