package export

// Cautions returns what every set says to whoever uses it. The same texts
// stand in the manifest and in every Parquet file.
func Cautions() []string {
	return []string{
		"Synthetic takes are variations of recorded ones. They are no evidence about people who were never recorded: " +
			"test on recordings of such people before anything depends on the result.",
		"Where a gesture starts or stops a machine or a vehicle, or watches over someone, no score of this set is a safety case. " +
			"The machine's own standards, the local codes and licensed practice decide.",
		"The way a person moves identifies that person, and a synthetic take carries the style of its source. " +
			"Record with consent, and treat the whole set as personal data.",
	}
}
