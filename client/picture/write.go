package picture

import (
	"bytes"
	"encoding/binary"
	"hash/crc32"
	"html"
	"image/png"
	"io"
	"strings"

	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// dotsPerInch is the resolution of the PNG.
const dotsPerInch = 200

// WriteSVG draws d as an SVG document of 24 by 15 cm: lines and words as vectors, the
// density as one embedded raster. It returns the faults found by [Diagram.Check], in which
// case nothing is written, or the first error of w.
func (d Diagram) WriteSVG(w io.Writer) error {
	if err := d.Check(); err != nil {
		return err
	}
	canvas := vgsvg.New(sheetWidth, sheetHeight)
	d.draw(draw.New(canvas))
	var doc bytes.Buffer
	if _, err := canvas.WriteTo(&doc); err != nil {
		return err
	}
	_, err := io.WriteString(w, d.finishSVG(doc.String()))
	return err
}

// finishSVG adds what gonum's canvas leaves out. None of the marks it looks for can stem
// from the caller's words, in which quotes and angle brackets are escaped.
func (d Diagram) finishSVG(doc string) string {
	// Faces of the same widths stand in where Liberation is not installed.
	doc = strings.ReplaceAll(doc, `style="font-family:Liberation Sans;`, `style="font-family:Liberation Sans,Arial,Helvetica,sans-serif;`)
	// The canvas embeds PNG data under the name of another format.
	doc = strings.ReplaceAll(doc, `xlink:href="data:image/jpg;`, `preserveAspectRatio="none" xlink:href="data:image/png;`)
	// A title for screen readers and browser tabs.
	const root = `xmlns:xlink="http://www.w3.org/1999/xlink">`
	title := "Time-space diagram"
	if d.Title != "" {
		title += ": " + d.Title
	}
	return strings.Replace(doc, root, root+"\n<title>"+html.EscapeString(title)+"</title>", 1)
}

// WritePNG draws d as a PNG of 24 by 15 cm at 200 dots per inch, 1890 by 1181 pixels. It returns
// the faults found by [Diagram.Check], in which case nothing is written, or the first error of w.
func (d Diagram) WritePNG(w io.Writer) error {
	if err := d.Check(); err != nil {
		return err
	}
	canvas := vgimg.NewWith(vgimg.UseWH(sheetWidth, sheetHeight), vgimg.UseDPI(dotsPerInch))
	d.draw(draw.New(canvas))
	var file bytes.Buffer
	if err := png.Encode(&file, canvas.Image()); err != nil {
		return err
	}
	_, err := w.Write(withResolution(file.Bytes()))
	return err
}

// withResolution puts a pHYs chunk (PNG specification, section 11.3.5.3) behind the header,
// so that word processors place the picture at its printed size.
func withResolution(file []byte) []byte {
	const header = 8 + 25 // signature and IHDR
	const perMetre = dotsPerInch * 10000 / 254
	body := binary.BigEndian.AppendUint32([]byte("pHYs"), perMetre)
	body = binary.BigEndian.AppendUint32(body, perMetre)
	body = append(body, 1) // the unit is the metre
	chunk := binary.BigEndian.AppendUint32(nil, uint32(len(body)-4))
	chunk = append(chunk, body...)
	chunk = binary.BigEndian.AppendUint32(chunk, crc32.ChecksumIEEE(body))
	return append(append(append([]byte{}, file[:header]...), chunk...), file[header:]...)
}
