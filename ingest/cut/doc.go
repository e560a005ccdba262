// Package cut makes takes out of one long recording: by the annotations that
// come with it ([Read], [ByAnnotation]), or where the body comes to rest
// ([AtRest]). It finds the frames and gives the evidence; it moves no samples.
package cut
