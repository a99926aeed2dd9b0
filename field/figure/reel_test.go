package figure

import (
	"bytes"
	"image"
	"image/color"
	"image/draw"
	"image/gif"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	vgdraw "gonum.org/v1/plot/vg/draw"
)

// played is an animation as a viewer shows it.
type played struct {
	coded    *gif.GIF
	pictures []*image.RGBA
	area     image.Rectangle // of the data
}

// play encodes the reel at its default size, decodes it and lays the frames one
// over the other.
func play(t *testing.T, r *reel) played {
	t.Helper()
	var f played
	open := r.open
	r.open = func(c vgdraw.Canvas) (vgdraw.Canvas, error) {
		data, err := open(c)
		f.area = pixels(data.Rectangle, 100, 433)
		return data, err
	}
	var file bytes.Buffer
	if err := r.encode(&file, Page{}, pace{}); err != nil {
		t.Fatal(err)
	}
	var err error
	if f.coded, err = gif.DecodeAll(&file); err != nil {
		t.Fatal(err)
	}
	screen := image.NewRGBA(image.Rect(0, 0, f.coded.Config.Width, f.coded.Config.Height))
	for _, next := range f.coded.Image {
		draw.Draw(screen, next.Rect, next, next.Rect.Min, draw.Over)
		picture := image.NewRGBA(screen.Rect)
		copy(picture.Pix, screen.Pix)
		f.pictures = append(f.pictures, picture)
	}
	return f
}

func TestReelCountDelaysSize(t *testing.T) {
	still := ramps(2, 3, 3)
	still[1] = still[0] // nothing changes, but the time passes
	for _, c := range []struct {
		a             Animation
		delays        []int // hundredths of a second
		width, height int   // millimetres / 25.4 × dots per inch, rounded
	}{
		{Animation{Frames: ramps(3, 3, 3)}, []int{10, 10, 100}, 630, 433},
		{Animation{Frames: still}, []int{10, 100}, 630, 433},
		{Animation{Frames: ramps(1, 3, 3), Delay: 20 * time.Millisecond}, []int{100}, 630, 433},
		{Animation{Frames: ramps(2, 3, 3), Delay: 2 * time.Second}, []int{200, 200}, 630, 433},
		{
			Animation{Frames: ramps(3, 3, 3), Delay: 44 * time.Millisecond, Hold: 50 * time.Millisecond, Page: Page{Width: 254, Height: 127, DPI: 50}},
			[]int{4, 4, 5}, 500, 250,
		},
	} {
		var file bytes.Buffer
		if err := c.a.Encode(&file); err != nil {
			t.Fatal(err)
		}
		g, err := gif.DecodeAll(&file)
		if err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(g.Delay, c.delays) || len(g.Image) != len(c.delays) || len(g.Image) > 1 && g.LoopCount != 0 {
			t.Errorf("%d frames with the delays %v, loop count %d; want %d, %v and 0, for ever", len(g.Image), g.Delay, g.LoopCount, len(c.delays), c.delays)
		}
		if g.Config.Width != c.width || g.Config.Height != c.height {
			t.Errorf("%d × %d pixels; want %d × %d", g.Config.Width, g.Config.Height, c.width, c.height)
		}
	}
}

func TestSaveGIF(t *testing.T) {
	folder := t.TempDir()
	a := Animation{Frames: ramps(2, 3, 3)}
	m := Motion{History: ramp(3, 3)}
	for name, save := range map[string]func(string) error{"a.gif": a.Save, "M.GIF": m.Save} {
		path := filepath.Join(folder, name)
		if err := save(path); err != nil {
			t.Fatal(err)
		}
		if file, err := os.ReadFile(path); err != nil || !strings.HasPrefix(string(file), "GIF89a") {
			t.Errorf("%s starts with %q, %v; want GIF89a", name, file[:min(6, len(file))], err)
		}
		for name, message := range map[string]string{"a.png": `a.png: format "png"; want gif`, "a": `format ""; want gif`, "none/a.gif": "no such file"} {
			if err := save(filepath.Join(folder, name)); err == nil || !strings.Contains(err.Error(), message) {
				t.Errorf("%s: error %v; want one with %q", name, err, message)
			}
		}
	}
	// An animation that cannot be drawn leaves the old file and no other.
	a.Component = 7
	if err := a.Save(filepath.Join(folder, "a.gif")); err == nil {
		t.Error("no error for component 7")
	}
	if entries, err := os.ReadDir(folder); err != nil || len(entries) != 2 {
		t.Errorf("%d files, %v; want 2", len(entries), err)
	}
}

// A palette fits into a file and has black, white and, for maps, the mark of what
// is not finite.
func TestPalettes(t *testing.T) {
	s, err := newShade(0, 1, false, levels)
	if err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		palette color.Palette
		want    []color.RGBA
	}{
		"map":   {shaded(s), append([]color.RGBA{notFinite, {A: 255}, {255, 255, 255, 255}}, s.table...)},
		"lines": {tinted(lineColours[:]), append([]color.RGBA{{255, 255, 255, 255}}, lineColours[:]...)},
	} {
		if len(c.palette) > 256 {
			t.Errorf("%s: %d colours; want at most 256", name, len(c.palette))
		}
		for _, want := range c.want {
			if !slices.Contains(c.palette, color.Color(want)) {
				t.Errorf("%s: no %v in the palette", name, want)
			}
		}
	}
}
