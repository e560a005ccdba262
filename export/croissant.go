package export

import (
	"fmt"
	"net/url"
	"path"
	"strconv"
	"strings"

	"strandwise/channels"
	"strandwise/export/pages"
)

// croissantName is the name of the file that describes the set to tools that
// find and load data sets.
const croissantName = "croissant.json"

// node is an object of JSON-LD. Its keys are written in sorted order.
type node = map[string]any

// croissant describes a set in the Croissant vocabulary, version 1.1 (MLCommons,
// http://mlcommons.org/croissant/1.1), in JSON-LD: every file with its SHA-256,
// every table with its columns, types and units, the labels and the splits.
// What the vocabulary requires and nobody stated is left out; see
// [About.Missing].
func croissant(m *Manifest, windows *WindowsLayout) ([]byte, error) {
	out := node{
		"@context":     croissantContext(),
		"@type":        "sc:Dataset",
		"conformsTo":   "http://mlcommons.org/croissant/1.1",
		"name":         m.About.title(),
		"description":  croissantSummary(m),
		"keywords":     []string{"gesture recognition", "human motion", "synthetic data"},
		"distribution": croissantFiles(m),
		"recordSet":    croissantRecords(m, windows),
		"usageInfo":    strings.Join(m.Cautions, " "),
	}
	if m.About.Creator != "" {
		out["creator"] = node{"@type": "sc:Organization", "name": m.About.Creator}
	}
	for key, text := range map[string]string{"license": m.About.Licence, "url": m.About.URL, "datePublished": m.About.Published} {
		if text != "" {
			out[key] = text
		}
	}
	text, err := marshal(out, "  ")
	if err != nil {
		return nil, fmt.Errorf("encode %s: %w", croissantName, err)
	}
	return append(text, '\n'), nil
}

// croissantContext returns the JSON-LD context that the vocabulary recommends,
// which tools compare with: its own terms stand under cr, all others are those of
// schema.org.
func croissantContext() node {
	out := node{
		"@language": "en", "@vocab": "http://schema.org/", "sc": "http://schema.org/",
		"cr": "http://mlcommons.org/croissant/", "rai": "http://mlcommons.org/croissant/RAI/", "dct": "http://purl.org/dc/terms/",
		"conformsTo": "dct:conformsTo",
		"data":       node{"@id": "cr:data", "@type": "@json"},
		"examples":   node{"@id": "cr:examples", "@type": "@json"},
		"dataType":   node{"@id": "cr:dataType", "@type": "@vocab"},
	}
	for _, term := range strings.Fields(`annotation arrayShape citeAs column containedIn equivalentProperty excludes extract
		field fileProperty fileObject fileSet format includes isArray isLiveDataset jsonPath key md5 parentField recordSet
		references regex readLines sdVersion separator source subField transform unArchive value`) {
		out[term] = "cr:" + term
	}
	return out
}

func croissantSummary(m *Manifest) string {
	return fmt.Sprintf("%d recorded takes of gestures and %d synthetic ones made from those that train: %d channels of motion, labels %s.",
		m.Takes(channels.Recorded), m.Takes(channels.Synthetic), len(m.Layout.Channels), strings.Join(m.labels(), ", "))
}

// labels lists the labels of the takes, sorted.
func (m *Manifest) labels() []string {
	return m.distinct(func(c Count) string { return c.Label })
}

// splits lists the splits of the takes, sorted.
func (m *Manifest) splits() []string {
	return m.distinct(func(c Count) string { return string(c.Split) })
}

// tables lists the tables that have files, in the order of AllTables.
func (m *Manifest) tables() []Table {
	var out []Table
	for _, t := range AllTables() {
		for _, f := range m.Files {
			if strings.HasPrefix(f.Path, string(t)+"/") {
				out = append(out, t)
				break
			}
		}
	}
	return out
}

// croissantFiles lists every file, and one set of files for each table.
func croissantFiles(m *Manifest) []node {
	var out []node
	for _, t := range m.tables() {
		out = append(out, node{
			"@type": "cr:FileSet", "@id": filesOf(t), "name": filesOf(t), "description": "The files of the table " + string(t) + ".",
			"encodingFormat": parquetTypes(), "includes": string(t) + "/*/*.parquet",
		})
	}
	for _, f := range m.Files {
		out = append(out, node{
			"@type": "cr:FileObject", "@id": f.Path, "name": f.Path, "contentUrl": f.Path,
			"contentSize": strconv.FormatInt(f.Bytes, 10) + " B", "sha256": f.SHA256, "encodingFormat": mediaType(f.Path),
		})
	}
	return out
}

func filesOf(t Table) string { return string(t) + "-files" }

// parquetTypes returns the registered media type of Parquet, and the one that
// tools of the vocabulary knew before it was registered.
func parquetTypes() []string {
	return []string{"application/vnd.apache.parquet", "application/x-parquet"}
}

func mediaType(name string) any {
	switch path.Ext(name) {
	case ".parquet":
		return parquetTypes()
	case ".json":
		return "application/json"
	case ".md":
		return "text/markdown"
	case ".html":
		return "text/html"
	}
	return "application/octet-stream"
}

// croissantRecords returns the record sets: splits, labels and the tables.
func croissantRecords(m *Manifest, windows *WindowsLayout) []node {
	out := []node{splitRecords(m.splits()), labelRecords(m.labels())}
	for _, t := range m.tables() {
		r := &records{table: t, length: -1}
		switch t {
		case Takes:
			r.add(m, fixedTakeColumns(), pages.Float32List, "id")
		case Frames:
			r.add(m, fixedFrameColumns(), pages.Float32, "take", "frame")
		case Windows:
			kind := pages.Float32List
			if windows != nil {
				r.length = windows.Length
				if r.scales = windows.Scales; len(r.scales) > 0 {
					kind = pages.Int16List
				}
			}
			r.add(m, fixedWindowColumns(), kind, "take", "window")
		}
		out = append(out, r.node)
	}
	return out
}

func splitRecords(names []string) node {
	var data []node
	for _, name := range names {
		class := "cr:TrainingSplit"
		if channels.Split(name) == channels.Test {
			class = "cr:TestSplit"
		}
		data = append(data, node{"splits/name": name, "splits/url": class})
	}
	return node{
		"@type": "cr:RecordSet", "@id": "splits", "name": "splits", "dataType": "cr:Split",
		"description": "What takes are for. Synthetic takes only train.",
		"key":         node{"@id": "splits/name"},
		"field": []node{
			{"@type": "cr:Field", "@id": "splits/name", "name": "name", "dataType": "sc:Text"},
			{"@type": "cr:Field", "@id": "splits/url", "name": "url", "dataType": "cr:Split"},
		},
		"data": data,
	}
}

func labelRecords(names []string) node {
	var data []node
	for _, name := range names {
		data = append(data, node{"labels/name": name})
	}
	return node{
		"@type": "cr:RecordSet", "@id": "labels", "name": "labels", "dataType": "sc:Enumeration",
		"description": "What was performed.",
		"key":         node{"@id": "labels/name"},
		"field":       []node{{"@type": "cr:Field", "@id": "labels/name", "name": "name", "dataType": "sc:Text"}},
		"data":        data,
	}
}

// records builds the record set of one table.
type records struct {
	node   node
	table  Table
	length int // of the lists, -1 when they differ
	scales []WindowScale
}

func (r *records) add(m *Manifest, own []pages.Column, kind pages.Kind, key ...string) {
	var keys, fields []node
	for _, name := range key {
		keys = append(keys, node{"@id": r.id(name)})
	}
	for _, c := range own {
		fields = append(fields, r.field(c.Name, c.Kind, ownColumn(c.Name)))
	}
	for i, c := range m.Layout.Channels {
		says := channelColumn(c)
		if len(r.scales) > 0 {
			says.text += fmt.Sprintf("; value = %g × number", r.scales[i].Scale)
		}
		fields = append(fields, r.field(c.Column, kind, says))
	}
	fields = append(fields, r.splitField())
	r.node = node{
		"@type": "cr:RecordSet", "@id": string(r.table), "name": string(r.table), "description": tableText(r.table),
		"key": keys, "field": fields,
	}
}

func tableText(t Table) string {
	switch t {
	case Frames:
		return "One row per frame of a take."
	case Windows:
		return "One row per window of a fixed number of frames."
	}
	return "One row per take, recorded and synthetic."
}

// id returns the id of a column. Ids are references, in which a name may not hold
// just any character.
func (r *records) id(column string) string { return string(r.table) + "/" + url.PathEscape(column) }

func (r *records) field(column string, kind pages.Kind, says described) node {
	out := node{
		"@type": "cr:Field", "@id": r.id(column), "name": column, "description": says.text, "dataType": dataType(column, kind),
		"source": node{"fileSet": node{"@id": filesOf(r.table)}, "extract": node{"column": column}},
	}
	if says.unit != "" {
		out["unitText"] = says.unit
	}
	if kind == pages.Float32List || kind == pages.Int16List {
		out["isArray"], out["arrayShape"] = true, strconv.Itoa(r.length)
	}
	switch column {
	case "label":
		out["references"] = node{"@id": "labels/name"}
	case "take":
		out["references"] = node{"@id": string(Takes) + "/id"}
	}
	return out
}

// splitField is the field whose value stands in the folder's name.
func (r *records) splitField() node {
	return node{
		"@type": "cr:Field", "@id": r.id("split"), "name": "split", "description": "what the take is for", "dataType": "sc:Text",
		"source": node{
			"fileSet":   node{"@id": filesOf(r.table)},
			"extract":   node{"fileProperty": "fullpath"},
			"transform": node{"regex": "^.*split=(train|test)/.*$"},
		},
		"references": node{"@id": "splits/name"},
	}
}

func dataType(column string, kind pages.Kind) any {
	switch kind {
	case pages.Text:
		if column == "label" {
			return []string{"sc:Text", "cr:Label"}
		}
		return "sc:Text"
	case pages.Int32, pages.Int16List:
		return "sc:Integer"
	}
	return "sc:Float"
}
