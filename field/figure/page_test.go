package figure

import (
	"bytes"
	"encoding/xml"
	"image/png"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

func TestPageSize(t *testing.T) {
	for _, c := range []struct {
		page          Page
		width, height int // millimetres / 25.4 × dots per inch, rounded
	}{
		{Page{}, 945, 650},
		{Page{Width: 254, Height: 127, DPI: 100}, 1000, 500},
		{Page{Width: 76.2, Height: 50.8, DPI: 300}, 900, 600},
	} {
		var b bytes.Buffer
		if err := (Map{History: ramp(3, 3), Page: c.page}).Encode(&b, "png"); err != nil {
			t.Fatal(err)
		}
		size, err := png.DecodeConfig(&b)
		if err != nil || size.Width != c.width || size.Height != c.height {
			t.Errorf("page %v has %d × %d pixels, %v; want %d × %d", c.page, size.Width, size.Height, err, c.width, c.height)
		}
	}
}

func TestSave(t *testing.T) {
	folder := t.TempDir()
	m := Map{History: ramp(3, 3), Title: "φ⁴ & a < b", Curves: []Curve{{X: []float64{0, 2}, Y: []float64{0, 2}, Label: "cone"}}}
	for name, start := range map[string]string{"a.png": "\x89PNG\r\n", "a.pdf": "%PDF-", "A.SVG": "<?xml"} {
		path := filepath.Join(folder, name)
		if err := m.Save(path); err != nil {
			t.Fatal(err)
		}
		file, err := os.ReadFile(path)
		if err != nil || !strings.HasPrefix(string(file), start) {
			t.Errorf("%s starts with %q, %v; want %q", name, file[:min(8, len(file))], err, start)
		}
	}
	for name, message := range map[string]string{"a.gif": `format "gif"; want png, pdf or svg`, "a": `format ""`, "none/a.png": "no such file"} {
		if err := m.Save(filepath.Join(folder, name)); err == nil || !strings.Contains(err.Error(), message) {
			t.Errorf("%s: error %v; want one with %q", name, err, message)
		}
	}
	if err := m.Encode(io.Discard, "jpeg"); err == nil {
		t.Error("no error for the format jpeg")
	}

	// A figure that cannot be drawn leaves the old file and no other.
	before, err := os.ReadFile(filepath.Join(folder, "a.png"))
	if err != nil {
		t.Fatal(err)
	}
	m.Component = 7
	if err := m.Save(filepath.Join(folder, "a.png")); err == nil {
		t.Error("no error for component 7")
	}
	after, err := os.ReadFile(filepath.Join(folder, "a.png"))
	if err != nil || !bytes.Equal(before, after) {
		t.Errorf("the old file was changed, %v", err)
	}
	if entries, err := os.ReadDir(folder); err != nil || len(entries) != 3 {
		t.Errorf("%d files, %v; want 3", len(entries), err)
	}
}

// SVG is well-formed, its images stretch to their place and carry their true type,
// and text is outlines.
func TestSVG(t *testing.T) {
	var b bytes.Buffer
	if err := (Map{History: ramp(3, 3), Title: "φ"}).Encode(&b, "svg"); err != nil {
		t.Fatal(err)
	}
	count := map[string]int{}
	d := xml.NewDecoder(&b)
	for {
		token, err := d.Token()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		element, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		count[element.Name.Local]++
		for _, a := range element.Attr {
			if a.Name.Local == "href" && !strings.HasPrefix(a.Value, "data:image/png;base64,iVBORw0KGgo") {
				t.Errorf("image is %.40q; want a PNG that says so", a.Value)
			}
			if a.Name.Local == "preserveAspectRatio" && a.Value == "none" {
				count["stretched"]++
			}
		}
	}
	if count["image"] != 2 || count["stretched"] != 2 || count["text"] != 0 || count["path"] < 10 {
		t.Errorf("elements %v; want 2 images, both stretched, no text and many paths", count)
	}
}

// A PDF shows the same picture as a PNG, the last slice on top: compared through
// pdftoppm of Poppler where it is installed.
func TestPDFUpright(t *testing.T) {
	h := ramp(2, 2) // 0, 1 below; 2, 3 above
	h.Data = []float64{0, 0, 1, 1}
	var b bytes.Buffer
	if err := (Map{History: h}).Encode(&b, "pdf"); err != nil {
		t.Fatal(err)
	}
	program, err := exec.LookPath("pdftoppm")
	if err != nil {
		t.Log("no pdftoppm on the path; only the making of the file was tested")
		return
	}
	cmd := exec.Command(program, "-r", "72", "-png")
	cmd.Stdin = &b
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	img, err := png.Decode(bytes.NewReader(out))
	if err != nil {
		t.Fatal(err)
	}
	x, height := img.Bounds().Dx()/2, img.Bounds().Dy()
	for y, white := range map[int]bool{height / 4: true, height * 2 / 3: false} {
		r, _, _, _ := img.At(x, y).RGBA()
		if r > 0x8000 != white {
			t.Errorf("at %d of %d from the top the red is %#x; want the last slice, white, above the first, black", y, height, r)
		}
	}
}
