// Package golden compares pictures and texts with files that people have
// looked at. Run the tests with -update to write the files anew; look at them
// before you commit them. What differs is written to testdata/failed.
package golden

import (
	"bytes"
	"flag"
	"image"
	"image/draw"
	"image/png"
	"os"
	"path/filepath"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files anew")

// Image compares an image with testdata/name.png. Pixels may differ by a few
// levels, and one in a thousand by more, as floating point may be fused
// differently on another processor.
func Image(t *testing.T, name string, got *image.RGBA) {
	t.Helper()
	path := filepath.Join("testdata", name+".png")
	if *update {
		write(t, path, encode(t, got))
		return
	}
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	decoded, err := png.Decode(file)
	if err != nil {
		t.Fatal(err)
	}
	want := image.NewRGBA(decoded.Bounds())
	draw.Draw(want, want.Bounds(), decoded, decoded.Bounds().Min, draw.Src)
	if want.Bounds() != got.Bounds() {
		t.Errorf("%s: size %v, want %v", name, got.Bounds(), want.Bounds())
	} else if n := different(got.Pix, want.Pix); 1000*n > len(got.Pix)/4 {
		t.Errorf("%s: %d of %d pixels differ", name, n, len(got.Pix)/4)
	} else {
		return
	}
	write(t, filepath.Join("testdata", "failed", name+".png"), encode(t, got))
}

// different counts pixels that differ by more than a few levels.
func different(a, b []uint8) int {
	const few = 6
	n := 0
	for i := 0; i < len(a); i += 4 {
		for k := i; k < i+4; k++ {
			if d := int(a[k]) - int(b[k]); d > few || d < -few {
				n++
				break
			}
		}
	}
	return n
}

// Text compares a text with testdata/name.
func Text(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if *update {
		write(t, path, got)
		return
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		failed := filepath.Join("testdata", "failed", name)
		write(t, failed, got)
		t.Errorf("%s differs from %s", failed, path)
	}
}

func encode(t *testing.T, m image.Image) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := png.Encode(&b, m); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func write(t *testing.T, path string, data []byte) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
}
